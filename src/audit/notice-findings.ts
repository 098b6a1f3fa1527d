/** Notices of the register that name a version which the assembly plugs in. Pure. */
import type { Finding } from '../model/finding.ts';
import type { ManifestSet } from '../model/manifest.ts';
import type { StandingNotice } from '../register/chain.ts';
import { inRange } from '../register/find.ts';
import { pluggedModules } from './validated.ts';

/**
 * A notice without versions speaks of commits; whether the code holds those is told by `mortise notice show`, so here it
 * counts, at most as a caution.
 */
export function noticeFindings(notices: readonly StandingNotice[], manifests: ManifestSet): Finding[] {
  const plugged = new Set(pluggedModules(manifests));
  return notices.flatMap(({ id, content, written, lifted }): Finding[] => {
    const declaration = manifests.modules.get(content.module);
    if (lifted !== null || declaration === undefined || !plugged.has(content.module)) return [];
    const { version, component } = declaration.value;
    if (content.component !== undefined && content.component !== component) return [];
    if (content.versions !== undefined && !inRange(version, content.versions)) return [];
    const declared = content.gravity ?? 'stop';
    const gravity = content.versions === undefined && declared === 'stop' ? 'caution' : declared;
    const states = (content.states ?? []).map(
      ({ quantity, unit, from, to }) => `${quantity} from ${from ?? 'anywhere'} to ${to ?? 'anywhere'} ${unit}`,
    );
    return [
      {
        kind: 'notice-touches',
        gravity,
        module: content.module,
        place: declaration.placeOf(['version']),
        says: `${content.module} ${version} has a recorded defect: ${content.title}.`,
        evidence: [
          { says: `${content.says} (notice ${id}, ${written.slice(0, 10)})` },
          ...(states.length === 0 ? [] : [{ says: `it shows only where the run meets ${states.join(' and ')}` }]),
          ...(content.versions === undefined
            ? [
                {
                  says: 'the notice names commits and no versions, so whether this one has the defect was not told from it',
                },
              ]
            : [{ says: `it touches versions ${content.versions}` }]),
        ],
        next: `plug in a version without it, or accept it with the reason why it does not matter here; "mortise notice show ${id}" tells more.`,
      },
    ];
  });
}
