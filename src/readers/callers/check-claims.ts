/** What is said of a value where it is passed held against what is said of it where it is taken: units. Linked code in, findings out. Pure. */
import { type Finding, sortFindings } from '../../model/finding.ts';
import type { ActualArgument, Argument, CallSite, Claim, FileInterface } from '../../model/interface.ts';
import type { Place } from '../../model/place.ts';
import { conversion, sameUnit } from '../../units/conversion.ts';
import type { LinkedCode } from '../link.ts';
import type { Provider } from '../resolver.ts';
import { formalOf } from './misfit.ts';

/** Units that are claimed, by what they are claimed of. */
type UnitClaims = ReadonlyMap<string, Claim>;

export function checkCallClaims(linked: LinkedCode): Finding[] {
  const claims = new Map<string, UnitClaims>();
  const claimsOf = (file: string): UnitClaims => {
    let known = claims.get(file);
    if (known === undefined) {
      known = unitClaims(linked.files.get(file)!);
      claims.set(file, known);
    }
    return known;
  };
  const findings: Finding[] = [];
  for (const [file, read] of linked.files) {
    if (read.calls.length === 0 || claimsOf(file).size === 0) continue;
    for (const call of read.calls) {
      const providers = linked.resolve(file, call);
      // Where the build chooses among several, each may have a unit of its own.
      if (providers.length !== 1) continue;
      const [provider] = providers;
      const taken = claimsOf(provider!.file);
      if (taken.size === 0) continue;
      for (const [index, actual] of call.args.entries()) {
        const formal = formalOf(actual, index, provider!.procedure.args);
        if (formal === undefined) continue;
        const said = claimOf(claimsOf(file), call.caller, nameIn(actual));
        const wanted = claimOf(taken, pathOf(provider!), formal.name);
        if (said === null || wanted === null) continue;
        const finding = compare(file, call, actual, formal, said, wanted, provider!);
        if (finding !== null) findings.push(finding);
      }
    }
  }
  return sortFindings(findings);
}

function unitClaims(read: FileInterface): UnitClaims {
  const found = new Map<string, Claim>();
  const doubted = new Set<string>();
  for (const claim of read.claims) {
    // A name that ends like a unit says too little to be held against a comment.
    if (claim.what !== 'unit' || claim.from === 'name') continue;
    const key = `${claim.parent ?? ''} ${claim.name}`;
    const before = found.get(key);
    // Two places that say different things say nothing.
    if (before !== undefined && !sameUnit(before.value, claim.value)) doubted.add(key);
    else if (before === undefined) found.set(key, claim);
  }
  for (const key of doubted) found.delete(key);
  return found;
}

/** The claim on a name in a procedure; where the procedure says nothing, its hosts may. */
function claimOf(claims: UnitClaims, procedure: string | null, name: string | null): Claim | null {
  if (name === null) return null;
  for (let at = procedure; at !== null; at = at.includes('::') ? at.slice(0, at.lastIndexOf('::')) : null) {
    const found = claims.get(`${at} ${name}`) ?? claims.get(`${at.slice(at.lastIndexOf(':') + 1)} ${name}`);
    if (found !== undefined) return found;
  }
  return null;
}

function pathOf({ procedure }: Provider): string {
  return procedure.parent === null ? procedure.name : `${procedure.parent}::${procedure.name}`;
}

/** The variable that is passed as it is, or with one factor or offset. */
function nameIn(actual: ActualArgument): string | null {
  if (actual.form === 'name' || actual.form === 'element' || actual.form === 'section') return actual.name ?? null;
  return scaledName(actual)?.name ?? null;
}

const NUMBER = String.raw`\d+\.?\d*(?:[ed][+-]?\d+)?(?:_\w+)?`;
const SCALED = new RegExp(String.raw`^([a-z_]\w*)([*/+-])(${NUMBER})$`, 'i');
const SCALED_BEHIND = new RegExp(String.raw`^(${NUMBER})([*+])([a-z_]\w*)$`, 'i');

/** `rho*1.0d-3`, `273.15 + t`: a variable and the one number that is applied to it. */
function scaledName(actual: ActualArgument): { name: string; operator: string; number: number } | null {
  if (actual.form !== 'expression') return null;
  const text = actual.text.replaceAll(' ', '');
  const ahead = SCALED.exec(text);
  const behind = ahead === null ? SCALED_BEHIND.exec(text) : null;
  const parts = ahead === null ? behind && [behind[3]!, behind[2]!, behind[1]!] : [ahead[1]!, ahead[2]!, ahead[3]!];
  if (parts === null) return null;
  const number = Number(parts[2]!.replace(/_\w+$/, '').replace(/d/i, 'e'));
  return { name: parts[0]!.toLowerCase(), operator: parts[1]!, number };
}

function compare(
  file: string,
  call: CallSite,
  actual: ActualArgument,
  formal: Argument,
  said: Claim,
  wanted: Claim,
  provider: Provider,
): Finding | null {
  const answer = conversion(said.value, wanted.value);
  // What is no unit, or ambiguous, or of another dimension than the name suggests is a matter of the comment, not of the call.
  if ('error' in answer || answer.readings !== undefined || answer.toReadings !== undefined) return null;
  const scaled = scaledName(actual);
  const same = answer.factor === 1 && answer.offset === 0;
  if (same) {
    if (scaled === null || !looksLikeConversion(scaled, said.value)) return null;
    return finding(file, call, said, wanted, provider, {
      says: `passes ${actual.text} for ${formal.name}, though ${said.name} is said to be in ${said.value}, as ${formal.name} is: it looks converted twice`,
      next: 'see which comment is right; drop the conversion, or correct the unit that is said.',
    });
  }
  if (scaled !== null) return null;
  return finding(file, call, said, wanted, provider, {
    says: `passes ${actual.text} in ${said.value} for ${formal.name} in ${wanted.value}: it looks never converted`,
    next: `convert it (factor ${answer.factorText}${answer.offset === 0 ? '' : `, offset ${answer.offset}`}), or correct the unit that is said.`,
  });
}

/** Offsets between degrees Celsius and kelvin, and whole powers of a thousand or a hundred: what conversions are made of. */
function looksLikeConversion({ operator, number }: { operator: string; number: number }, unit: string): boolean {
  if (operator === '+' || operator === '-')
    return Math.abs(number - 273.15) < 0.02 && /^(?:k|kelvin|deg_?c|celsius|oc)$/i.test(unit);
  const exponent = Math.log10(Math.abs(number));
  return Math.abs(exponent) >= 2 && Math.abs(exponent - Math.round(exponent)) < 1e-12;
}

function finding(
  file: string,
  call: CallSite,
  said: Claim,
  wanted: Claim,
  provider: Provider,
  { says, next }: { says: string; next: string },
): Finding {
  return {
    kind: 'call-claim',
    gravity: 'caution',
    place: { file, line: call.line, column: call.column },
    says: `This call of ${call.callee} ${says}.`,
    evidence: [
      { says: `said where it is passed: ${said.text}`, place: placeOf(file, said) },
      { says: `said where it is taken: ${wanted.text}`, place: placeOf(provider.file, wanted) },
    ],
    next,
  };
}

function placeOf(file: string, claim: Claim): Place {
  return { file, line: claim.line, column: claim.column };
}
