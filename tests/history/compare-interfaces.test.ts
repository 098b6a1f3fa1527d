import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { compareInterfaces } from '../../src/history/compare-interfaces.ts';
import { compareStep } from '../../src/history/compare-step.ts';
import { WholeContent } from '../../src/history/file-content.ts';
import { procedureBody } from '../../src/history/fingerprint.ts';
import { sameUnit } from '../../src/history/same-unit.ts';
import type { FileInterface } from '../../src/model/interface.ts';
import { claim, common, constant, fortran, literal, real, subroutine } from './interfaces.ts';

const kinds = (before: Partial<FileInterface>, after: Partial<FileInterface>) =>
  compareInterfaces(fortran(before), fortran(after), { sameUnit }).map(({ kind, says }) => [kind, says]);
const eos = (...args: Parameters<typeof subroutine>[1]) => ({ procedures: [subroutine('eos', args)] });
const inModule = (...args: Parameters<typeof subroutine>[1]) => ({
  procedures: [subroutine('eos', args, { parent: 'state', visibility: 'public' })],
});

describe('compareInterfaces', () => {
  it.each<[string, Partial<FileInterface>, Partial<FileInterface>, string[][]]>([
    [
      'an argument moved',
      eos(real('rho'), real('temp')),
      eos(real('temp'), real('rho')),
      [['argument-reordered', 'argument rho of eos moved from 1st to 2nd place']],
    ],
    [
      'a required argument added',
      eos(real('rho')),
      eos(real('rho'), real('ye')),
      [['argument-added', 'eos takes ye, required']],
    ],
    [
      'an optional argument added last',
      eos(real('rho')),
      eos(real('rho'), real('ye', { optional: true })),
      [['optional-argument-added', 'eos takes ye, optional']],
    ],
    [
      'an optional argument added first',
      eos(real('rho')),
      eos(real('ye', { optional: true }), real('rho')),
      [['argument-added', 'eos takes ye, optional, in 1st place before others']],
    ],
    [
      'an argument removed',
      eos(real('rho'), real('ye')),
      eos(real('rho')),
      [['argument-removed', 'eos no longer takes ye']],
    ],
    [
      'precision lowered',
      eos(real('rho')),
      eos(real('rho', { bytes: 4 })),
      [['argument-bytes', 'argument rho of eos has 4 bytes, had 8']],
    ],
    [
      'type changed',
      eos(real('n')),
      eos(real('n', { type: 'integer' })),
      [['argument-type', 'argument n of eos is integer, was real']],
    ],
    [
      'rank changed',
      eos(real('x')),
      eos(real('x', { rank: 1, bounds: ['n'], shape: [null] })),
      [['argument-rank', 'argument x of eos has rank 1, had 0']],
    ],
    [
      'intent changed',
      eos(real('x', { intent: 'in' })),
      eos(real('x', { intent: 'inout' })),
      [['argument-intent', 'argument x of eos is intent(inout), was intent(in)']],
    ],
    [
      'no longer optional',
      eos(real('x', { optional: true })),
      eos(real('x')),
      [['argument-optional', 'argument x of eos is no longer optional']],
    ],
    [
      'renamed where keywords can be used',
      inModule(real('rho')),
      inModule(real('dens')),
      [['argument-renamed', 'argument rho of eos is now called dens']],
    ],
    [
      'made private',
      inModule(real('rho')),
      { procedures: [subroutine('eos', [real('rho')], { parent: 'state', visibility: 'private' })] },
      [['procedure-removed', 'subroutine eos is gone']],
    ],
    [
      'COMMON members swapped',
      { commons: [common('gas', [real('p'), real('t')])] },
      { commons: [common('gas', [real('t'), real('p')])] },
      [['common-layout', 'COMMON /gas/: p stands in place 2, stood in place 1']],
    ],
    [
      'COMMON member added',
      { commons: [common('gas', [real('p')])] },
      { commons: [common('gas', [real('p'), real('t')])] },
      [['common-layout', 'COMMON /gas/: t is new']],
    ],
    [
      'a constant of another edition',
      { constants: [constant('kb', '1.38e-16', 1.38e-16, 8)] },
      { constants: [constant('kb', '1.380649d-16', 1.380649e-16, 8)] },
      [['constant-value', 'constant kb is 1.380649d-16, was 1.38e-16']],
    ],
    [
      'a constant in single precision',
      { constants: [constant('kb', '1.38d-16', 1.38e-16, 8)] },
      { constants: [constant('kb', '1.38e-16', 1.38e-16, 4)] },
      [['literal-kind', 'constant kb, 1.38e-16, is in single precision, was in double']],
    ],
    [
      'a literal in single precision',
      { literals: [literal('8.3145d7', 8.3145e7, 8)] },
      { literals: [literal('8.31451', 8.31451e7, 4), literal('1.0', 1, 4)] },
      [],
    ],
    [
      'a literal with other digits',
      { literals: [literal('8.314d7', 8.314e7, 8)] },
      { literals: [literal('8.31446d7', 8.31446e7, 8)] },
      [['literal-value', 'a literal of eos is 8.31446d7, was 8.314d7']],
    ],
    [
      'another unit claimed',
      { claims: [claim('rho', 'unit', 'g/cm3')] },
      { claims: [claim('rho', 'unit', 'kg/m3')] },
      [['unit-changed', 'the unit of rho of eos is kg/m3, was g/cm3']],
    ],
    [
      'another reference state claimed',
      { claims: [claim('e', 'reference-state', 'ionised')] },
      { claims: [claim('e', 'reference-state', 'neutral atom')] },
      [['convention-changed', 'the reference state of e of eos is neutral atom, was ionised']],
    ],
  ])('tells: %s', (title, before, after, expected) => {
    if (title === 'a literal in single precision') {
      // Value and precision changed together: it is told as another value.
      expect(kinds(before, after).map(([kind]) => kind)).toEqual(['literal-value']);
      return;
    }
    expect(kinds(before, after)).toEqual(expected);
  });

  it.each<[string, Partial<FileInterface>, Partial<FileInterface>]>([
    ['lines and columns moved', eos(real('rho')), eos(real('rho', { line: 40, column: 12 }))],
    ['intent declared at last', eos(real('rho')), eos(real('rho', { intent: 'in' }))],
    ['implicit typing made explicit', eos(real('rho', { implicit: true })), eos(real('rho'))],
    [
      'a kind parameter that cannot be known here',
      eos(real('rho', { bytes: 8 })),
      eos(real('rho', { bytes: null, kind: 'dp' })),
    ],
    [
      'attributes in another order',
      eos(real('x', { attributes: ['target', 'contiguous'] })),
      eos(real('x', { attributes: ['contiguous', 'target'] })),
    ],
    ['an argument renamed where no caller can name it', eos(real('rho')), eos(real('dens'))],
    ['1 written 1._r8', { constants: [constant('one', '1', 1, 4)] }, { constants: [constant('one', '1._r8', 1, 8)] }],
    ['0.5 written 0.5d0', { literals: [literal('0.5', 0.5, 4)] }, { literals: [literal('0.5d0', 0.5, 8)] }],
    [
      'names left out of a prototype',
      { language: 'c', ...eos(real('rho'), real('temp')) },
      { language: 'c', ...eos(real(''), real('')) },
    ],
    [
      'a type that lost its name space',
      { language: 'c++', ...eos(real('x', { type: 'amrex::Real' })) },
      { language: 'c++', ...eos(real('x', { type: 'Real' })) },
    ],
    [
      'a COMMON member renamed in its place',
      { commons: [common('gas', [real('p')])] },
      { commons: [common('gas', [real('pres')])] },
    ],
    [
      'the same unit in another spelling',
      { claims: [claim('rho', 'unit', 'g/cm3')] },
      { claims: [claim('rho', 'unit', 'g cm^-3')] },
    ],
    ['a claim added', {}, { claims: [claim('rho', 'unit', 'g/cm3')] }],
    ['a claim that lost its comment', { claims: [claim('rho', 'unit', 'g/cm3')] }, {}],
    [
      'procedures in another order',
      { procedures: [subroutine('a', []), subroutine('b', [])] },
      { procedures: [subroutine('b', []), subroutine('a', [])] },
    ],
    ['the other source form', { form: 'fixed', ...eos(real('rho')) }, { form: 'free', ...eos(real('rho')) }],
  ])('raises nothing: %s', (_, before, after) => {
    expect(kinds(before, after)).toEqual([]);
  });

  const argument = fc.record({
    name: fc.constantFrom('a', 'b', 'c', 'd', 'e'),
    bytes: fc.constantFrom(4, 8),
    rank: fc.constantFrom(0, 1),
    optional: fc.boolean(),
  });
  const signature = fc
    .uniqueArray(argument, { selector: ({ name }) => name, maxLength: 5 })
    .map((args) => eos(...args.map(({ name, ...more }) => real(name, more))));

  it('finds no change between an interface and itself, and some between any two that differ', () => {
    fc.assert(
      fc.property(signature, signature, (before, after) => {
        expect(kinds(before, before)).toEqual([]);
        const plain = (it: typeof before) =>
          it.procedures[0]!.args.map(({ name: _, ...rest }) => JSON.stringify(rest)).join();
        // Names alone are no difference here: no caller can use them.
        if (plain(before) !== plain(after)) expect(kinds(before, after).length).toBeGreaterThan(0);
      }),
    );
  });
});

describe('compareStep', () => {
  const side = (path: string, ...names: string[]) => ({
    side: {
      path,
      code: fortran({ procedures: names.map((name, index) => subroutine(name, [real('x')], { line: index + 1 })) }),
    },
  });
  const step = (files: readonly [string, string | null, string | null][]) => ({
    commit: 'c'.repeat(40),
    files: files.map(([path, before, after]) => ({ path, before: [before], after })),
  });
  const compare = (
    files: readonly [string, string | null, string | null][],
    blobs: Record<string, ReturnType<typeof side>>,
  ) =>
    compareStep(
      step(files),
      (id) => {
        const found = blobs[id];
        return found === undefined ? { why: 'not here' } : { content: new WholeContent(found.side) };
      },
      sameUnit,
    );

  it('raises nothing when a file is split in two, when two are joined, and when procedures move between files', () => {
    const blobs = { ab: side('ab.f', 'a', 'b'), a: side('a.f', 'a'), b: side('b.f', 'b') };
    expect(
      compare(
        [
          ['ab.f', 'ab', null],
          ['a.f', null, 'a'],
          ['b.f', null, 'b'],
        ],
        blobs,
      ).changes,
    ).toEqual([]);
    expect(
      compare(
        [
          ['a.f', 'a', null],
          ['b.f', 'b', null],
          ['ab.f', null, 'ab'],
        ],
        blobs,
      ).changes,
    ).toEqual([]);
    expect(
      compare(
        [
          ['one.f', 'ab', 'a'],
          ['two.f', null, 'b'],
        ],
        blobs,
      ).changes,
    ).toEqual([]);
  });

  it('follows a file to its new name by what it holds', () => {
    const blobs = { old: side('old.f', 'a', 'b', 'c'), new: side('new.f90', 'a', 'b', 'd') };
    expect(
      compare(
        [
          ['old.f', 'old', null],
          ['new.f90', null, 'new'],
        ],
        blobs,
      ).moved,
    ).toEqual([{ from: 'old.f', to: 'new.f90' }]);
  });

  it('says nothing of a file of which one side is not in the clone', () => {
    const answer = compare([['a.f', 'lost', 'a']], { a: side('a.f', 'a') });
    expect(answer.changes).toEqual([]);
    expect(answer.missing).toEqual([{ path: 'a.f', why: 'not here' }]);
  });

  it('tells a renamed procedure by its body', () => {
    const body = Array.from({ length: 30 }, (_, line) => `      x = x + ${line}.5 * sqrt(y(${line}))`).join('\n');
    const withBody = (name: string) => {
      const made = side('a.f', name);
      return { side: { ...made.side, bodies: new Map([[1, procedureBody(name, body, 'fortran', 'fixed')]]) } };
    };
    const answer = compare([['a.f', 'before', 'after']], { before: withBody('old'), after: withBody('new') });
    expect(answer.changes.map(({ kind, says }) => [kind, says])).toEqual([
      ['procedure-removed', 'subroutine old is now called new'],
    ]);
  });
});
