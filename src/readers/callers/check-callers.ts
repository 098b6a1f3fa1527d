/** Calls held against what they call, across files and languages. Linked code in, findings out, the dangerous ones apart from old practice. Pure. */
import { type Evidence, type Finding, sortFindings } from '../../model/finding.ts';
import type { CallSite, Procedure } from '../../model/interface.ts';
import type { Place } from '../../model/place.ts';
import type { LinkedCode } from '../link.ts';
import type { Provider } from '../resolver.ts';
import { exchangedPairs } from './exchanged.ts';
import { type Languages, type Misfit, misfitsOf, takenArguments } from './misfit.ts';
import { Usage } from './usage.ts';

interface Site {
  readonly file: string;
  readonly call: CallSite;
}

interface Judged extends Site {
  readonly providers: readonly Provider[];
}

export function checkCallers(linked: LinkedCode): Finding[] {
  const judged: Judged[] = [];
  const usages = new Map<Procedure, Usage>();
  for (const [file, read] of linked.files) {
    for (const call of read.calls) {
      const providers = candidates(linked, file, call);
      if (providers.length === 0) continue;
      judged.push({ file, call, providers });
      for (const provider of providers) {
        let usage = usages.get(provider.procedure);
        if (usage === undefined) {
          usage = new Usage();
          usages.set(provider.procedure, usage);
        }
        usage.add(file, call, takenArguments(call, provider.procedure, languagesOf(linked, file, provider)));
      }
    }
  }
  const findings: Finding[] = [];
  const groups = new Map<Procedure, { provider: Provider; sites: Site[]; misfits: Misfit[] }>();
  for (const site of judged) {
    const found = leastMisfit(linked, site, usages);
    if (found === null) continue;
    for (const misfit of found.misfits) {
      if (!misfit.grouped) {
        findings.push(findingOf(linked, site, found.provider, misfit));
        continue;
      }
      let group = groups.get(found.provider.procedure);
      if (group === undefined) {
        group = { provider: found.provider, sites: [], misfits: [] };
        groups.set(found.provider.procedure, group);
      }
      group.sites.push(site);
      group.misfits.push(misfit);
    }
  }
  for (const group of groups.values()) findings.push(...groupFindings(group));
  return sortFindings(findings);
}

/** With several providers the build decides: only a call that fits none of them is wrong, and the one that it fits best is named. */
function leastMisfit(
  linked: LinkedCode,
  { file, call, providers }: Judged,
  usages: ReadonlyMap<Procedure, Usage>,
): { provider: Provider; misfits: Misfit[] } | null {
  let least: { provider: Provider; misfits: Misfit[] } | null = null;
  for (const provider of providers) {
    const languages = languagesOf(linked, file, provider);
    const usage = usages.get(provider.procedure)!;
    const misfits = softened(misfitsOf(call, provider.procedure, languages), call, provider, usage);
    if (!misfits.some((one) => one.kind === 'call-count' || one.kind === 'call-keyword')) {
      const formals = takenArguments(call, provider.procedure, languages);
      for (const [i, j] of exchangedPairs(call.args, formals, usage))
        misfits.push({
          kind: 'call-order',
          grouped: false,
          says: `passes ${call.args[i]!.text} for ${formals[i]!.name} and ${call.args[j]!.text} for ${formals[j]!.name}: they look exchanged`,
        });
    }
    if (misfits.length === 0) return null;
    if (least === null || weight(misfits) < weight(least.misfits)) least = { provider, misfits };
  }
  return least;
}

function weight(misfits: readonly Misfit[]): number {
  return misfits.reduce((sum, one) => sum + (one.kind === 'call-count' ? 100 : one.grouped ? 1 : 10), 0);
}

/** Names that the MPI standard keeps for the library (MPI 4.1, 2.6.2): a definition of one is a stand-in, and takes any type. */
const MPI_NAME = /^p?mpi_/i;

/** What passes storage on whatever its type is no error of the call. */
function softened(misfits: Misfit[], call: CallSite, provider: Provider, usage: Usage): Misfit[] {
  // A list of its own: more is found and put behind.
  if (misfits.length === 0) return [];
  const standIn = MPI_NAME.test(provider.procedure.name);
  const inStandIn = MPI_NAME.test(call.caller?.split('::').at(-1) ?? '');
  return misfits.flatMap((one): Misfit[] => {
    if (one.kind !== 'call-kind' && one.kind !== 'call-type' && one.kind !== 'call-rank') return [one];
    if (standIn) return [];
    const storage = inStandIn || (one.formal !== undefined && usage.isStorage(one.formal));
    return [storage && !one.grouped ? { ...one, grouped: true } : one];
  });
}

/** Definitions that a call can mean; none where another language's rules make a verdict a guess. */
function candidates(linked: LinkedCode, file: string, call: CallSite): readonly Provider[] {
  const { language } = linked.files.get(file)!;
  const found = linked.resolve(file, call);
  if (found.length === 0) return found;
  if (language === 'fortran' || language === 'c') {
    const fit = found.filter((one) => sameWorld(language, linked.files.get(one.file)!.language));
    // What only another program of the checkout defines, in a file of its own, is no verdict on this one.
    return fit.filter((one) => one.procedure.parent !== null || linked.together(file, one.file));
  }
  // JavaScript lets any argument be left out.
  if (language === 'javascript') return [];
  if (language === 'c++') {
    const fortran = found.filter((one) => linked.files.get(one.file)!.language === 'fortran');
    if (fortran.length > 0) return fortran;
  }
  // Methods, overloads and imports: one plain function of that name in all of the code, or no verdict.
  const plain = found.filter(
    (one) =>
      one.procedure.kind === 'function' &&
      one.procedure.parent === null &&
      linked.files.get(one.file)!.language === language,
  );
  // Inside of a class of C++ an unqualified name may be a member, inherited from anywhere.
  if (language === 'c++' && call.caller?.includes('::') && plain[0]?.file !== file) return [];
  return call.how === 'function' && found.length === 1 && plain.length === 1 ? plain : [];
}

function sameWorld(from: string, to: string): boolean {
  return from === to || (from === 'fortran' && to === 'c') || (from === 'c' && to === 'fortran');
}

function languagesOf(linked: LinkedCode, file: string, provider: Provider): Languages {
  return { from: linked.files.get(file)!.language, to: linked.files.get(provider.file)!.language };
}

const NEXT = {
  'call-count': 'pass what the definition takes, or see whether another definition is meant.',
  'call-keyword': 'correct the keyword.',
  'call-kind': 'pass a variable of the kind that is taken: what is read or written beyond it is garbage.',
  'call-type': 'pass a variable of the type that is taken.',
  'call-rank': 'pass an array for an array, a scalar for a scalar.',
  'call-order': 'look at the order; where it is meant, rename one side so that nobody stumbles.',
  'call-constant-out': 'pass a variable.',
} as const;

function findingOf(linked: LinkedCode, { file, call, providers }: Judged, provider: Provider, misfit: Misfit): Finding {
  const evidence: Evidence[] = [{ says: signature(provider.procedure), place: placeOf(provider) }];
  const alternatives = providers.length;
  if (alternatives > 1) evidence.push({ says: `one of ${alternatives} definitions, and the call fits none` });
  const standIn = MPI_NAME.test(provider.procedure.name);
  if (standIn) evidence.push({ says: 'a stand-in for the MPI library, which may take other arguments' });
  // A C compiler refuses such a call itself where it sees a prototype: that this text is compiled is in doubt.
  const compiled = linked.files.get(file)!.language === 'c' && linked.files.get(provider.file)!.language === 'c';
  const doubt = misfit.kind === 'call-order' || misfit.kind === 'call-type' || alternatives > 1 || standIn || compiled;
  return {
    kind: misfit.kind,
    gravity: doubt ? 'caution' : 'stop',
    place: { file, line: call.line, column: call.column },
    says: `This call of ${call.callee} ${misfit.says}.`,
    evidence,
    next: NEXT[misfit.kind],
  };
}

const GROUPED = {
  'call-kind': {
    one: 'is of another size unless the build promotes defaults or the storage is only passed through',
    many: 'are of another size unless the build promotes defaults or the storage is only passed through',
    next: 'say under "promote" in the assembly what the build gives defaults, or pass the kind that is taken.',
  },
  'call-type': {
    one: 'is of another type than it takes',
    many: 'are of another type than it takes',
    next: 'see that the storage is only passed through; where a value is meant, pass the right type.',
  },
  'call-rank': {
    one: 'is a scalar for an array, or an array for a scalar',
    many: 'are scalars for arrays, or arrays for scalars',
    next: 'see that one element is all that is used; where an array is meant, pass it.',
  },
} as const;

/** One note a callee and kind of misfit. */
function groupFindings({
  provider,
  sites,
  misfits,
}: {
  provider: Provider;
  sites: readonly Site[];
  misfits: readonly Misfit[];
}): Finding[] {
  return (Object.keys(GROUPED) as (keyof typeof GROUPED)[]).flatMap((kind): Finding[] => {
    const at = misfits.flatMap((one, index) => (one.kind === kind ? [index] : []));
    if (at.length === 0) return [];
    const first = sites[at[0]!]!;
    const words = GROUPED[kind];
    return [
      {
        kind,
        gravity: 'note',
        place: { file: first.file, line: first.call.line, column: first.call.column },
        says: `${at.length} ${at.length === 1 ? 'argument' : 'arguments'} of ${provider.procedure.name} ${at.length === 1 ? words.one : words.many}.`,
        evidence: [
          { says: signature(provider.procedure), place: placeOf(provider) },
          ...at.slice(0, 5).map((index) => {
            const { file, call } = sites[index]!;
            return { says: misfits[index]!.says, place: { file, line: call.line, column: call.column } };
          }),
        ],
        next: words.next,
      },
    ];
  });
}

function signature(procedure: Procedure): string {
  return `${procedure.name}(${procedure.args.map((one) => one.name).join(', ')})`;
}

function placeOf({ file, procedure }: Provider): Place {
  return { file, line: procedure.line, column: procedure.column };
}
