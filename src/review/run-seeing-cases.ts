/** Runs at the head just the cases that can see a change, by the manifests that were chosen, and compares them with the base's references. */
import { compareCase } from '../compare/compare-outputs.edge.ts';
import { type CaseOutcome, worstClass } from '../runs/case-outcome.ts';
import { casesNamed } from '../runs/configuration.ts';
import { readNoise, referencePlace, referenceStands } from '../runs/reference-files.edge.ts';
import { type LaboratoryRequest, withLaboratory } from '../runs/rerun.ts';

/**
 * A change that renews a reference would otherwise be held against itself.
 *
 * @param base  commit whose references count
 * @param head  commit that is built and run
 */
export function runSeeingCases(
  request: LaboratoryRequest,
  names: readonly string[],
  base: string,
  head: string,
): Promise<CaseOutcome[]> {
  const folder = request.manifestFolder ?? 'manifests';
  return withLaboratory(request, async (laboratory) => {
    const tree = await laboratory.tree(head);
    const { listing } = await laboratory.tree(base);
    return Promise.all(
      casesNamed(request.manifests, names).map(async (one): Promise<CaseOutcome> => {
        const outcome = await tree.examine(one, []);
        if (outcome.result === null || outcome.state === 'failed') return outcome;
        const reference = await referencePlace(listing, folder, one.case, laboratory.store.scratch);
        if (!referenceStands(reference)) return outcome;
        const noise = readNoise(reference)?.floors;
        const deviations = await compareCase(one, reference, outcome.result, noise === undefined ? {} : { noise });
        return { ...outcome, state: 'compared', why: '', deviations, class: worstClass(deviations) };
      }),
    );
  });
}

/**
 * Which files each case's build and run read at the base, where a kept run tells; null where none does. Runs nothing.
 *
 * @param base  commit that the kept runs must have been made of, as far as they read it
 */
export function filesReadAt(
  request: LaboratoryRequest,
  base: string,
): Promise<Map<string, ReadonlySet<string> | null>> {
  return withLaboratory(request, async (laboratory) => {
    const tree = await laboratory.tree(base);
    return new Map(casesNamed(request.manifests, []).map((one) => [one.case, tree.readBefore(one)]));
  });
}
