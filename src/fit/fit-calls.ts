/** The calls in the expecting module's source against the procedure that the offering side names. */
import type { Evidence, Finding } from '../model/finding.ts';
import type { ActualArgument, Argument, CallSite, Language } from '../model/interface.ts';
import type { Expectation, Offer } from '../model/manifest.ts';
import { comparePlaces, type Place } from '../model/place.ts';
import { exchanged } from './argument-order.ts';
import { findingAt, firstThere, type Path } from './finding-at.ts';
import { type FoundCall, type FoundProcedure, type LinkedModule, lastPart, sameName } from './linked-module.ts';
import { ordinal } from './ordinal.ts';

export interface CallsInput {
  readonly expecting: LinkedModule;
  readonly offering: LinkedModule;
  readonly expectation: Expectation;
  readonly expectPath: Path;
  readonly offer: Offer;
  readonly procedure: FoundProcedure | null;
  /** The call whose order of arguments was already told. */
  readonly toldAt: Place | null;
}

export function checkCalls(input: CallsInput): { readonly findings: Finding[]; readonly differs: string[] } {
  const { expecting, expectation, offer, procedure } = input;
  const findings: Finding[] = [];
  const differs: string[] = [];
  const called = expectation.calls ?? offer.procedure;
  if (called === undefined) return { findings, differs };
  const calls = expecting.calls(called);
  const path = firstThere(expecting.declaration, [...input.expectPath, 'calls'], [...input.expectPath, 'contract']);
  if (calls.length === 0 && expectation.calls !== undefined && expecting.files.length > 0 && expecting.readCompletely) {
    findings.push(
      findingAt(expecting.declaration, path, {
        kind: 'joint-call',
        gravity: 'caution',
        module: expecting.name,
        says: `Nothing in the source of ${expecting.name} calls ${called}.`,
        next: 'name the procedure that it does call, or remove "calls".',
      }),
    );
  }
  // Under another name the call goes through something in between, whose arguments are its own matter.
  const direct = procedure !== null && sameName(lastPart(called), procedure.procedure.name, expecting.language);
  if (!direct) return { findings, differs };
  for (const found of calls) {
    for (const wrong of wrongIn(found, input, procedure)) {
      if (wrong.grave) differs.push(wrong.short);
      const evidence: Evidence[] = [
        { says: `the call in ${found.call.caller ?? 'the file'}`, place: expecting.place(found.file, found.call) },
        {
          says: `${procedure.procedure.name}(${procedure.procedure.args.map((one) => one.name).join(', ')})`,
          place: input.offering.place(procedure.file, procedure.procedure),
        },
      ];
      findings.push({
        ...findingAt(expecting.declaration, path, {
          kind: 'joint-call',
          gravity: wrong.grave ? 'stop' : 'caution',
          module: expecting.name,
          says: wrong.says,
          next: wrong.next,
          evidence,
        }),
        place: expecting.place(found.file, found.call),
        evidence: [...evidence.slice(1), { says: 'the expectation', place: expecting.declaration.placeOf(path) }],
      });
    }
  }
  return { findings, differs };
}

interface Wrong {
  readonly grave: boolean;
  readonly short: string;
  readonly says: string;
  readonly next: string;
}

function wrongIn(found: FoundCall, input: CallsInput, { procedure, file }: FoundProcedure): Wrong[] {
  const { call } = found;
  const { expecting, offering } = input;
  const language = expecting.languageOf(found.file);
  const dummies = procedure.args;
  const name = procedure.name;
  const variadic = dummies.some((one) => one.passing?.startsWith('variadic'));
  const required = dummies.filter(
    (one) => !one.optional && one.default === undefined && !one.passing?.startsWith('variadic'),
  );
  const given = call.args.filter((one) => one.form !== 'absent').length;
  if (given < required.length || (!variadic && given > dummies.length)) {
    const takes = required.length === dummies.length ? `${dummies.length}` : `${required.length} to ${dummies.length}`;
    return [
      {
        grave: true,
        short: `called with ${given} arguments, takes ${takes}`,
        says: `${name} takes ${takes} arguments; this call passes ${given}.`,
        next: `bring the call up to ${name}(${dummies.map((one) => one.name).join(', ')}).`,
      },
    ];
  }
  const wrong: Wrong[] = [];
  const swapped = exchanged(call, procedure, language);
  const told = input.toldAt !== null && comparePlaces(expecting.place(found.file, call), input.toldAt) === 0;
  if (swapped.length > 0 && !told) {
    const passes = swapped.map((position) => `${call.args[position - 1]!.name} ${ordinal(position)}`).join(', ');
    const takes = swapped.map((position) => `${dummies[position - 1]!.name} ${ordinal(position)}`).join(', ');
    wrong.push({
      grave: true,
      short: `the call passes ${passes}`,
      says: `The call passes ${passes}, where ${name} takes ${takes}.`,
      next: `pass the arguments in the order of ${name}(${dummies.map((one) => one.name).join(', ')}), or by keyword.`,
    });
  }
  for (const [actual, dummy, position] of paired(call, dummies, language)) {
    wrong.push(
      ...mismatch(
        actual,
        dummy,
        position,
        name,
        offering.bytesOf(dummy),
        expecting.bytesOf({ ...actual, bytes: actual.bytes ?? null }),
        offering.languageOf(file),
      ),
    );
  }
  return wrong;
}

function paired(
  call: CallSite,
  dummies: readonly Argument[],
  language: Language,
): (readonly [ActualArgument, Argument, number])[] {
  return call.args.flatMap((actual, index) => {
    const at =
      actual.keyword === undefined ? index : dummies.findIndex((one) => sameName(one.name, actual.keyword!, language));
    const dummy = dummies[at];
    return dummy === undefined || actual.form === 'absent' ? [] : [[actual, dummy, at + 1] as const];
  });
}

/** Type, bytes and rank of what is passed against what is taken, in languages that pass by reference without looking. */
function mismatch(
  actual: ActualArgument,
  dummy: Argument,
  position: number,
  procedure: string,
  takesBytes: number | null,
  passesBytes: number | null,
  language: Language,
): Wrong[] {
  if (language !== 'fortran' || actual.type === undefined || dummy.type === 'unknown' || actual.type === 'unknown')
    return [];
  const passes = actual.type.toLowerCase();
  const takes = dummy.type.toLowerCase();
  if (!BASIC.test(passes) || !BASIC.test(takes) || dummy.type === 'character') return [];
  const what = `the ${ordinal(position)} argument of ${procedure}, ${dummy.name}`;
  if (passes !== takes) {
    return [
      {
        grave: true,
        short: `${dummy.name}: passes ${passes}, takes ${takes}`,
        says: `The call passes ${passes} "${actual.text}" for ${what}, which is ${takes}.`,
        next: `pass a value of type ${takes}.`,
      },
    ];
  }
  if (passesBytes !== null && takesBytes !== null && passesBytes !== takesBytes) {
    return [
      {
        grave: true,
        short: `${dummy.name}: passes ${passesBytes} bytes, takes ${takesBytes}`,
        says: `The call passes "${actual.text}" with ${passesBytes} bytes for ${what}, which has ${takesBytes}.`,
        next: `pass a ${takes} of ${takesBytes} bytes, or change the kind of ${dummy.name}.`,
      },
    ];
  }
  if (actual.rank !== undefined && dummy.rank === 0 && actual.rank > 0 && actual.form === 'name') {
    return [
      {
        grave: false,
        short: `${dummy.name}: passes rank ${actual.rank}, takes a scalar`,
        says: `The call passes the array "${actual.text}" for ${what}, which is a scalar.`,
        next: 'pass one element, or make sure that the procedure is elemental.',
      },
    ];
  }
  return [];
}

const BASIC = /^(real|integer|logical|complex|double precision)$/;
