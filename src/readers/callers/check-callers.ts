/** Calls held against what they call, across files and languages. Linked code in, findings out, the dangerous ones apart from old practice. Pure. */
import { type Evidence, type Finding, sortFindings } from '../../model/finding.ts';
import type { ActualArgument, Argument, CallSite, Procedure } from '../../model/interface.ts';
import type { Place } from '../../model/place.ts';
import type { LinkedCode, Provider } from '../link.ts';
import { exchangedPairs } from './exchanged.ts';

interface Site {
  readonly file: string;
  readonly call: CallSite;
}

/** How one call differs from one definition. */
interface Misfit {
  readonly kind: 'call-count' | 'call-keyword' | 'call-kind' | 'call-type' | 'call-order' | 'call-constant-out';
  readonly says: string;
  /** What old codes do on purpose: told once a callee, at low gravity. */
  readonly grouped: boolean;
}

export function checkCallers(linked: LinkedCode): Finding[] {
  const findings: Finding[] = [];
  const grouped = new Map<string, { provider: Provider; sites: Site[]; says: string[] }>();
  for (const [file, read] of linked.files) {
    for (const call of read.calls) {
      const providers = candidates(linked, file, call);
      if (providers.length === 0) continue;
      const misfits = providers.map((provider) =>
        misfitsOf(
          call,
          provider.procedure,
          hiddenLengths(call, read.language, linked.files.get(provider.file)!.language),
        ),
      );
      // With several providers the build decides: only a call that fits none of them is wrong.
      if (misfits.some((list) => list.length === 0)) continue;
      const [least] = [...misfits.entries()].sort(([, a], [, b]) => weight(a) - weight(b));
      const [index, list] = least!;
      const provider = providers[index]!;
      for (const misfit of list) {
        if (!misfit.grouped) findings.push(findingOf({ file, call }, provider, misfit, providers.length));
        else {
          const key = `${provider.file} ${provider.procedure.line}`;
          const group = grouped.get(key) ?? { provider, sites: [], says: [] };
          group.sites.push({ file, call });
          group.says.push(misfit.says);
          grouped.set(key, group);
        }
      }
    }
  }
  for (const group of grouped.values()) findings.push(groupFinding(group));
  return sortFindings(findings);
}

function weight(misfits: readonly Misfit[]): number {
  return misfits.reduce((sum, one) => sum + (one.kind === 'call-count' ? 100 : one.grouped ? 1 : 10), 0);
}

/** Definitions that a call can mean; none where another language's rules make a verdict a guess. */
function candidates(linked: LinkedCode, file: string, call: CallSite): readonly Provider[] {
  const language = linked.files.get(file)!.language;
  const specifics = new Set(linked.generics.get(call.callee) ?? []);
  const found = [...linked.resolve(file, call), ...[...specifics].flatMap((name) => linked.providers.get(name) ?? [])];
  if (language === 'fortran' || language === 'c')
    return found.filter((one) => sameWorld(language, linked.files.get(one.file)!.language));
  // JavaScript lets any argument be left out.
  if (language === 'javascript') return [];
  // Methods, overloads and imports: one plain function of that name in all of the code, or no verdict.
  const plain = found.filter(
    (one) =>
      one.procedure.kind === 'function' &&
      one.procedure.parent === null &&
      linked.files.get(one.file)!.language === language,
  );
  return call.how === 'function' && found.length === 1 && plain.length === 1 ? plain : [];
}

function sameWorld(from: string, to: string): boolean {
  return from === to || (from === 'fortran' && to === 'c');
}

/** Fortran passes the length of each character argument to C behind the others. */
function hiddenLengths(call: CallSite, from: string, to: string): number {
  return from === 'fortran' && to === 'c' ? call.args.filter((one) => one.type === 'character').length : 0;
}

function misfitsOf(call: CallSite, procedure: Procedure, hidden: number): Misfit[] {
  const args = hidden === 0 ? procedure.args : procedure.args.slice(0, procedure.args.length - hidden);
  if (call.args.some((one) => one.form === 'absent')) return [];
  const variadic = args.some((one) => one.passing === 'variadic' || one.passing === 'variadic-keyword');
  const keywords = call.args.filter((one) => one.keyword !== undefined);
  const unknown = keywords.find((one) => !args.some((formal) => formal.name === one.keyword));
  if (unknown !== undefined && !variadic) {
    return [
      {
        kind: 'call-keyword',
        grouped: false,
        says: `passes ${unknown.keyword}, which ${procedure.name} does not take`,
      },
    ];
  }
  const required = args.filter(
    (one) =>
      !one.optional && one.default === undefined && one.passing !== 'variadic' && one.passing !== 'variadic-keyword',
  );
  const given = call.args.length;
  const missing = required.filter(
    (formal) => args.indexOf(formal) >= given - keywords.length && !keywords.some((one) => one.keyword === formal.name),
  );
  if (!variadic && (given > args.length || missing.length > 0)) {
    const takes = required.length === args.length ? String(args.length) : `${required.length} to ${args.length}`;
    return [
      {
        kind: 'call-count',
        grouped: false,
        says: `passes ${given} ${given === 1 ? 'argument' : 'arguments'} where ${procedure.name} takes ${takes}`,
      },
    ];
  }
  const pairs = call.args.flatMap((actual, index): [ActualArgument, Argument][] => {
    const formal = actual.keyword === undefined ? args[index] : args.find((one) => one.name === actual.keyword);
    return formal === undefined ? [] : [[actual, formal]];
  });
  return [
    ...pairs.flatMap(([actual, formal]) => misfitOf(actual, formal)),
    ...exchangedPairs(call.args, args).map(
      ([i, j]): Misfit => ({
        kind: 'call-order',
        grouped: false,
        says: `passes ${call.args[i]!.text} for ${args[i]!.name} and ${call.args[j]!.text} for ${args[j]!.name}: they look exchanged`,
      }),
    ),
  ];
}

function misfitOf(actual: ActualArgument, formal: Argument): Misfit[] {
  if ((formal.intent === 'out' || formal.intent === 'inout') && actual.form === 'literal') {
    return [
      {
        kind: 'call-constant-out',
        grouped: false,
        says: `passes the constant ${actual.text} for ${formal.name}, which is written to`,
      },
    ];
  }
  const [from, to] = [classOf(actual.type), classOf(formal.type)];
  if (from === null || to === null) return [];
  if (from !== to) {
    // Scratch storage of another type is passed on purpose in old codes.
    const scratch = actual.form === 'name' || actual.form === 'element';
    return [
      {
        kind: 'call-type',
        grouped: scratch,
        says: `passes ${actual.text} (${actual.type}) for ${formal.name} (${formal.type})`,
      },
    ];
  }
  if (
    actual.bytes == null ||
    formal.bytes === null ||
    actual.bytes === formal.bytes ||
    from === 'character' ||
    from === 'logical'
  )
    return [];
  // Whether a default real is as wide as one of 8 bytes is for the build to say.
  const open = from !== 'integer' && (actual.declaredDefault === true) !== (formal.kind === undefined);
  const said = `passes ${actual.text} of ${actual.bytes} bytes for ${formal.name} of ${formal.bytes}`;
  return [{ kind: 'call-kind', grouped: open, says: said }];
}

function classOf(type: string | undefined): 'integer' | 'real' | 'complex' | 'logical' | 'character' | null {
  switch (type) {
    case 'integer':
    case 'real':
    case 'complex':
    case 'logical':
    case 'character':
      return type;
    default:
      return null;
  }
}

const NEXT = {
  'call-count': 'pass what the definition takes, or see whether another definition is meant.',
  'call-keyword': 'correct the keyword.',
  'call-kind': 'pass a variable of the kind that is taken: what is read or written beyond it is garbage.',
  'call-type': 'pass a variable of the type that is taken.',
  'call-order': 'look at the order; where it is meant, rename one side so that nobody stumbles.',
  'call-constant-out': 'pass a variable.',
} as const;

function findingOf({ file, call }: Site, provider: Provider, misfit: Misfit, alternatives: number): Finding {
  const evidence: Evidence[] = [{ says: `${signature(provider.procedure)}`, place: placeOf(provider) }];
  if (alternatives > 1) evidence.push({ says: `one of ${alternatives} definitions, and the call fits none` });
  return {
    kind: misfit.kind,
    gravity: misfit.kind === 'call-order' || misfit.kind === 'call-type' || alternatives > 1 ? 'caution' : 'stop',
    place: { file, line: call.line, column: call.column },
    says: `This call of ${call.callee} ${misfit.says}.`,
    evidence,
    next: NEXT[misfit.kind],
  };
}

function groupFinding({
  provider,
  sites,
  says,
}: {
  provider: Provider;
  sites: readonly Site[];
  says: readonly string[];
}): Finding {
  const [first] = sites;
  const kinds = says.every((one) => / bytes for /.test(one));
  return {
    kind: kinds ? 'call-kind' : 'call-type',
    gravity: 'note',
    place: { file: first!.file, line: first!.call.line, column: first!.call.column },
    says: `${sites.length} ${sites.length === 1 ? 'argument' : 'arguments'} of ${provider.procedure.name} ${sites.length === 1 ? 'is' : 'are'} of another ${kinds ? 'size unless the build promotes defaults' : 'type than it takes'}.`,
    evidence: [
      { says: signature(provider.procedure), place: placeOf(provider) },
      ...sites.slice(0, 5).map((site, index) => ({
        says: says[index]!,
        place: { file: site.file, line: site.call.line, column: site.call.column },
      })),
    ],
    next: kinds
      ? 'say under "promote" in the assembly what the build gives defaults, or pass the kind that is taken.'
      : 'see that the storage is only passed through; where a value is meant, pass the right type.',
  };
}

function signature(procedure: Procedure): string {
  return `${procedure.name}(${procedure.args.map((one) => one.name).join(', ')})`;
}

function placeOf({ file, procedure }: Provider): Place {
  return { file, line: procedure.line, column: procedure.column };
}
