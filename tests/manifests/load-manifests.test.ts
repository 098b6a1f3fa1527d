import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { loadManifests, manifestsUnreadable } from '../../src/manifests/load-manifests.ts';
import { findingText } from '../../src/report/finding-text.ts';
import { bytes, lines, load, SOUND } from './manifest-text.ts';

const WIDE = { width: 100, colour: false };
const printed = (found: ReturnType<typeof load>) => found.findings.map((one) => findingText(one, WIDE)).join('\n');
const spoil = (path: string, from: string, to: string) => {
  const text = SOUND[path]!;
  expect(text).toContain(from);
  return load({ [path]: text.replace(from, to) });
};

describe('sound manifests', () => {
  it('are read without a finding, every record by its name', () => {
    const { set, findings } = load();
    expect(findings).toEqual([]);
    expect(set.assembly?.value.plugged).toEqual({ 'equation-of-state': 'eos-ionising', hydrodynamics: 'hydro' });
    expect([...set.modules.keys()]).toEqual(['eos-ionising', 'hydro']);
    expect([...set.contracts.keys()]).toEqual(['gas-state']);
    expect([...set.cases.keys()]).toEqual(['cloud-shock']);
    expect(Object.keys(set.contracts.get('gas-state')!.value.quantities)).toEqual([
      'density',
      'temperature',
      'pressure',
      'internal-energy',
    ]);
  });

  it('give the place of every key and value, and of the nearest part for what is not there', () => {
    const eos = load().set.modules.get('eos-ionising')!;
    expect(eos.placeOf(['offers', 0, 'units', 'internal-energy'])).toEqual({
      file: 'manifests/modules/eos-ionising.yaml',
      line: 10,
      column: 30,
    });
    expect(eos.placeOf(['offers', 0, 'units', 'internal-energy'], 'key').column).toBe(13);
    expect(eos.placeOf(['offers', 0, 'nothing', 'of', 'that']).line).toBe(7);
    expect(eos.lineText(4)).toBe('version: 2.1.0');
    expect(eos.excerptOf(['version'])).toEqual({ line: 4, text: 'version: 2.1.0', column: 10, width: 5 });
  });

  it('may begin with a byte order mark, which is no column, and may end their lines as Windows does', () => {
    const text = SOUND['manifests/modules/hydro.yaml']!.replaceAll('\n', '\r\n').replace('version', 'vesion');
    const { findings } = load({ 'manifests/modules/hydro.yaml': `\ufeff${text}` });
    expect(lines(findings)).toEqual(['modules/hydro.yaml:3:1 manifest-unknown-key']);
    expect(findings[0]!.evidence[0]!.excerpt!.text).toBe('vesion: 1.0.0');
  });

  it('carry the revision that they were read at into every place', () => {
    const { findings } = load({ 'manifests/assembly.yaml': 'assembly: x\n' }, { revision: 'a'.repeat(40) });
    expect(findings[0]!.place.revision).toBe('a'.repeat(40));
  });

  it('take a contract of the program when the code has none of that name, and the own one before it', () => {
    const shipped = new Map([
      ['mortise:contracts/gas-state.yaml', bytes(SOUND['manifests/contracts/gas-state.yaml']!)],
    ]);
    const without = load({ 'manifests/contracts/gas-state.yaml': null }, { shipped });
    expect(without.findings).toEqual([]);
    expect(without.set.contracts.get('gas-state')!.file).toBe('mortise:contracts/gas-state.yaml');
    expect(load({}, { shipped }).set.contracts.get('gas-state')!.file).toBe('manifests/contracts/gas-state.yaml');
  });

  it('give preprocessor names and variables of the environment as text, as it is written', () => {
    const { set, findings } = load({
      'manifests/assembly.yaml': `${SOUND['manifests/assembly.yaml']}build: {run: make, makes: [run], define: {MPI: 1, NX: 0x10, MODE: fast, ON: true}}\n`,
    });
    expect(findings).toEqual([]);
    expect(set.assembly!.value.build!.define).toEqual({ MPI: '1', NX: '0x10', MODE: 'fast', ON: 'true' });
  });

  it('hold a quantity called like a property of every object without mistaking it', () => {
    const contract = SOUND['manifests/contracts/gas-state.yaml']!.replace('pressure:       ', 'constructor:    ');
    const { findings } = load({ 'manifests/contracts/gas-state.yaml': contract });
    expect(lines(findings)).toEqual(['modules/eos-ionising.yaml:9:50 manifest-unknown-name']);
  });
});

describe('an error', () => {
  it('says where, what, and what to write instead', () => {
    const found = spoil('manifests/modules/hydro.yaml', 'expects:', 'expcets:');
    expect(printed(found)).toBe(`manifests/modules/hydro.yaml:5:1  stop  manifest-unknown-key
  5 | expcets:
    | ^^^^^^^
A module has no key "expcets".
Next: write "expects", or remove it.
`);
  });

  it.each([
    [
      'a key that is missing',
      'manifests/modules/hydro.yaml',
      'version: 1.0.0\n',
      '',
      'modules/hydro.yaml:1:1 manifest-invalid',
      'A module must say "version", and this one does not.',
      'add "version:" here: version of the module (Semantic Versioning 2.0.0).',
    ],
    [
      'a version of two numbers',
      'manifests/modules/hydro.yaml',
      '1.0.0',
      '1.10',
      'modules/hydro.yaml:3:10 manifest-invalid',
      '"version" is a text, and YAML reads 1.10 as a number.',
      'write three numbers as Semantic Versioning 2.0.0 asks: 1.10.0.',
    ],
    [
      'a version with a leading v',
      'manifests/modules/hydro.yaml',
      '1.0.0',
      'v1.0.0',
      'modules/hydro.yaml:3:10 manifest-invalid',
      '"v1.0.0" is not a version.',
      'write three numbers as Semantic Versioning 2.0.0 asks: 1.0.0.',
    ],
    [
      'a number of Fortran',
      'manifests/modules/eos-ionising.yaml',
      '[1e-26, 1e-14]',
      '[1d-26, 1e-14]',
      'modules/eos-ionising.yaml:12:24 manifest-invalid',
      '"density" is a number; YAML reads "1d-26" as a text.',
      'write 1e-26.',
    ],
    [
      'a range that ends below its beginning',
      'manifests/modules/eos-ionising.yaml',
      '[10, 1e8]',
      '[1e8, 10]',
      'modules/eos-ionising.yaml:12:52 manifest-invalid',
      'The range ends below its beginning.',
      'write [10, 100000000].',
    ],
    [
      'a range of one number',
      'manifests/modules/eos-ionising.yaml',
      '[10, 1e8]',
      '[10]',
      'modules/eos-ionising.yaml:12:52 manifest-invalid',
      'A range has two ends; this one has 1.',
      'write two numbers, [1e-26, 1e-14], with null for an end that has no bound.',
    ],
    [
      'a contract without a range of versions',
      'manifests/modules/hydro.yaml',
      'gas-state ^1',
      'gas-state',
      'modules/hydro.yaml:6:15 manifest-invalid',
      '"gas-state" is not a contract and a range of its versions.',
      'say which versions of the contract: "gas-state ^1.0".',
    ],
    [
      'a range that semver does not know',
      'manifests/modules/hydro.yaml',
      'gas-state ^1',
      'gas-state about-one',
      'modules/hydro.yaml:6:15 manifest-invalid',
      '"about-one" is no range of versions.',
      'write a range such as ^1.2, ~1.2.0, >=1.2 <3 or 1.x.',
    ],
    [
      'a choice that is not open',
      'manifests/contracts/gas-state.yaml',
      'intent: in,  domain: [3',
      'intent: input,  domain: [3',
      'contracts/gas-state.yaml:6:44 manifest-invalid',
      '"input" is no choice for "intent".',
      'write "in", "out" or "inout".',
    ],
    [
      'a key without a value',
      'manifests/modules/hydro.yaml',
      'component: hydrodynamics',
      'component:',
      'modules/hydro.yaml:2:1 manifest-invalid',
      '"component" is empty.',
      'write a name, or remove the key.',
    ],
    [
      'a scalar where a list belongs',
      'manifests/modules/hydro.yaml',
      '[src/hydro.ts]',
      'src/hydro.ts',
      'modules/hydro.yaml:4:39 manifest-invalid',
      '"files" is a list, such as [first, second]; this is a text.',
      'write a list, such as [first, second].',
    ],
    [
      'a path out of the repository',
      'manifests/modules/hydro.yaml',
      'src/hydro.ts',
      '../other/hydro.ts',
      'modules/hydro.yaml:4:40 manifest-outside',
      'The path "../other/hydro.ts" leads out of its folder with "..".',
      'write it from the root of the repository, without "..".',
    ],
    [
      'a path from the root of the machine',
      'manifests/modules/hydro.yaml',
      'src/hydro.ts',
      '/etc/hydro.ts',
      'modules/hydro.yaml:4:40 manifest-outside',
      'The path "/etc/hydro.ts" leads out of the repository.',
      'write it from the root of the repository, and bring in what lies elsewhere.',
    ],
    [
      'a module that is not declared',
      'manifests/assembly.yaml',
      'eos-ionising',
      'eos-ionizing',
      'assembly.yaml:3:22 manifest-unknown-name',
      'There is no module called "eos-ionizing".',
      'write "eos-ionising", or declare "eos-ionizing".',
    ],
    [
      'a module of another component',
      'manifests/assembly.yaml',
      'hydrodynamics: hydro',
      'gravity: hydro',
      'assembly.yaml:4:12 manifest-inconsistent',
      'The module "hydro" fills hydrodynamics, not gravity.',
      'plug it into hydrodynamics, or name a module that fills gravity.',
    ],
    [
      'a quantity that the contract lacks',
      'manifests/modules/eos-ionising.yaml',
      '{density: rho',
      '{densty: rho',
      'modules/eos-ionising.yaml:9:17 manifest-unknown-name',
      'There is no quantity of gas-state called "densty".',
      'write "density", or declare "densty".',
    ],
    [
      'a convention with no such choice',
      'manifests/modules/eos-ionising.yaml',
      'energy-zero: neutral-atom',
      'energy-zero: ionized',
      'modules/eos-ionising.yaml:11:32 manifest-inconsistent',
      '"ionized" is no choice for energy-zero in gas-state.',
      'write "neutral-atom" or "ionised", or add the choice to the contract with a new version.',
    ],
    [
      'a procedure that its own source list lacks',
      'manifests/modules/eos-ionising.yaml',
      'procedure: eos_ionising',
      'procedure: eos_ionisng',
      'modules/eos-ionising.yaml:8:16 manifest-unknown-name',
      'There is no procedure under "source" called "eos_ionisng".',
      'write "eos_ionising", or declare "eos_ionisng".',
    ],
    [
      'a feature of a quantity that is no output',
      'manifests/cases/cloud-shock.yaml',
      'of: temperature',
      'of: temprature',
      'cases/cloud-shock.yaml:10:26 manifest-unknown-name',
      'There is no output quantity called "temprature".',
      'write "temperature", or declare "temprature".',
    ],
    [
      'an error of the grid of something that is not compared',
      'manifests/cases/cloud-shock.yaml',
      'conserved: [mass]',
      'grid-error: {temprature: {fine: 1, middle: 2, coarse: 4, ratio: 2}}',
      'cases/cloud-shock.yaml:11:14 manifest-unknown-name',
      'There is no quantity or feature called "temprature".',
      'write "temperature", or declare "temprature".',
    ],
    [
      'a conserved total that is no output',
      'manifests/cases/cloud-shock.yaml',
      '[mass]',
      '[mass, energy]',
      'cases/cloud-shock.yaml:11:19 manifest-unknown-name',
      'There is no output quantity called "energy".',
      'write "temperature" or "mass".',
    ],
    [
      'a placeholder that nothing fills',
      'manifests/cases/cloud-shock.yaml',
      '{select.EOS}',
      '{select.EQS}',
      'cases/cloud-shock.yaml:2:6 manifest-unknown-name',
      'Nothing fills {select.EQS} in this command.',
      'write {select.EOS}.',
    ],
    [
      'a negative tolerance',
      'manifests/cases/cloud-shock.yaml',
      '{relative: 1e-4}',
      '{relative: -1e-4}',
      'cases/cloud-shock.yaml:10:76 manifest-invalid',
      '"relative" is at least 0; this is -1e-4.',
      'write 0 or more.',
    ],
    [
      'a tab as indent',
      'manifests/assembly.yaml',
      '  hydrodynamics',
      '\thydrodynamics',
      'assembly.yaml:4:1 manifest-syntax',
      'A tab stands where YAML counts spaces.',
      'indent with spaces.',
    ],
    [
      'a key that stands twice',
      'manifests/modules/hydro.yaml',
      'version: 1.0.0',
      'version: 1.0.0\nversion: 1.0.1',
      'modules/hydro.yaml:4:1 manifest-syntax',
      'The key "version" stands here a second time; only one of the two values would count.',
      'remove one of them, or merge their values.',
    ],
    [
      'a tag that asks for code',
      'manifests/modules/hydro.yaml',
      'version: 1.0.0',
      'version: !!js/function "() => 1"',
      'modules/hydro.yaml:3:24 manifest-unreadable',
      'The value is marked with the tag "tag:yaml.org,2002:js/function"; a manifest is data, and tags are never followed.',
      'remove the tag and write the value itself.',
    ],
    [
      'a second document',
      'manifests/modules/hydro.yaml',
      'expects:',
      '---\nexpects:',
      'modules/hydro.yaml:5:1 manifest-syntax',
      'A second YAML document begins here.',
      'give every manifest a file of its own, and remove the "---" line.',
    ],
    [
      'an alias to nothing',
      'manifests/modules/hydro.yaml',
      'version: 1.0.0',
      'version: *other',
      'modules/hydro.yaml:3:10 manifest-syntax',
      'No part of this manifest is marked &other before this alias.',
      'write the part out instead of the alias.',
    ],
    [
      'a bracket that is never closed',
      'manifests/modules/hydro.yaml',
      '[src/hydro.ts]}',
      '[src/hydro.ts',
      'modules/hydro.yaml:5:1 manifest-syntax',
      'This does not line up with what it belongs to, or a bracket before it is still open.',
      'start the keys of one map in the same column, and close every [ and {.',
    ],
    [
      'another YAML',
      'manifests/modules/hydro.yaml',
      'module: hydro',
      '%YAML 1.1\n---\nmodule: hydro',
      'modules/hydro.yaml:1:1 manifest-syntax',
      'Manifests are YAML 1.2; 1.1 reads "no" as false and 1_000 as a number.',
      'remove the %YAML line, or write "%YAML 1.2".',
    ],
  ])('is found for %s', (_, path, from, to, where, says, next) => {
    const { findings } = spoil(path, from, to);
    expect(lines(findings)).toEqual([where]);
    const finding = findings[0]!;
    expect(finding.says).toBe(says);
    expect(finding.next).toBe(next);
  });

  it('in a unit points at the part that is none, in quotes too, and says what was probably meant', () => {
    for (const [text, column] of [
      ['gram/parsek', 35],
      ['"gram/parsek"', 36],
    ] as const) {
      const { findings } = spoil(
        'manifests/modules/eos-ionising.yaml',
        'internal-energy: erg/g',
        `internal-energy: ${text}`,
      );
      expect(lines(findings)).toEqual([`modules/eos-ionising.yaml:10:${column} unit-unknown`]);
      expect(findings[0]!.evidence[0]!.excerpt!.width).toBe(6);
      expect(findings[0]!.next).toBe('write "parsec".');
    }
  });

  it('is only a caution for a unit that can be read in two ways, and the manifest is taken', () => {
    const { findings, set } = spoil('manifests/contracts/gas-state.yaml', 'unit: erg/g', 'unit: b');
    expect(findings.map((one) => [one.kind, one.gravity])).toEqual([['unit-ambiguous', 'caution']]);
    expect(findings[0]!.says).toContain('barn');
    expect(set.contracts.has('gas-state')).toBe(true);
  });

  it('of syntax is told once, not for everything that follows it', () => {
    const { findings } = spoil(
      'manifests/modules/eos-ionising.yaml',
      '{internal-energy: erg/g}',
      '{internal-energy: erg/g ]}',
    );
    expect(findings.map((one) => one.kind)).toEqual(['manifest-syntax']);
  });

  it('comes with all others of its file at once', () => {
    const { findings } = load({
      'manifests/modules/hydro.yaml': `module: hydro
component: Hydro Dynamics
version: one
source: {langage: typescript, files: []}
expects: [{contract: gas-state ^1, units: {density: []}}]
author: me
`,
    });
    expect(lines(findings)).toEqual([
      'modules/hydro.yaml:2:12 manifest-invalid',
      'modules/hydro.yaml:3:10 manifest-invalid',
      'modules/hydro.yaml:4:10 manifest-unknown-key',
      'modules/hydro.yaml:4:38 manifest-invalid',
      'modules/hydro.yaml:5:53 manifest-invalid',
      'modules/hydro.yaml:6:1 manifest-unknown-key',
    ]);
  });

  it('in one file is not repeated by those that refer to it', () => {
    const { findings } = load({ 'manifests/modules/hydro.yaml': 'module: hydro\nversion: [\n' });
    expect(new Set(findings.map((one) => one.place.file))).toEqual(new Set(['manifests/modules/hydro.yaml']));
  });

  it('of two files with one name shows both', () => {
    const { findings } = load({ 'manifests/modules/zydro.yaml': SOUND['manifests/modules/hydro.yaml']! });
    expect(lines(findings)).toEqual(['modules/zydro.yaml:1:9 manifest-duplicate']);
    expect(findings[0]!.evidence[1]!.place?.file).toBe('manifests/modules/hydro.yaml');
  });

  it('of a second assembly says which is used, unless one of them was named', () => {
    const second = { 'manifests/assembly.yml': 'assembly: other\nplugged: {hydrodynamics: hydro}\n' };
    expect(lines(load(second).findings)).toEqual(['assembly.yml:1:11 manifest-duplicate']);
    const named = load(second, { assembly: 'manifests/assembly.yml' });
    expect(named.findings).toEqual([]);
    expect(named.set.assembly?.value.assembly).toBe('other');
  });

  it('for a manifest in the wrong folder says where it belongs, and nothing else', () => {
    const { findings } = load({ 'manifests/cases/gas.yaml': SOUND['manifests/contracts/gas-state.yaml']! });
    expect(findings.map((one) => one.next)).toEqual(['move it to contracts/ in the folder of the manifests.']);
  });

  it('counts columns in characters, also beyond the basic plane', () => {
    const { findings } = load({ 'manifests/modules/hydro.yaml': 'module: hydro\ntitle: {"\u{1F9EA}\u{1F9EA}": 1}\n' });
    expect(findings.some((one) => one.place.line === 2 && one.place.column === 8)).toBe(true);
    const later = load({ 'manifests/assembly.yaml': 'assembly: x\nplugged: {"\u{1F9EA}": hydro, gravty: nothing}\n' });
    expect(lines(later.findings)).toContain('assembly.yaml:2:11 manifest-invalid');
  });

  it('makes the manifests unreadable when the file could not be taken, and not when only a name is unknown', () => {
    expect(manifestsUnreadable(spoil('manifests/modules/hydro.yaml', 'version: 1.0.0', 'version: 1').findings)).toBe(
      true,
    );
    expect(manifestsUnreadable(spoil('manifests/assembly.yaml', 'eos-ionising', 'eos-ideal').findings)).toBe(false);
  });
});

describe('hostile input', () => {
  const one = (content: string | Uint8Array) => load({ 'manifests/modules/hydro.yaml': content }).findings;

  it('that is encoded otherwise is named with the place of the first wrong byte', () => {
    const utf16 = (text: string) => Uint8Array.from([0xff, 0xfe, ...[...text].flatMap((c) => [c.charCodeAt(0), 0])]);
    expect(one(utf16('module: hydro\n'))[0]!.says).toBe('The manifest is written in UTF-16, not in UTF-8.');
    expect(one(utf16('module: hydro\n').slice(2))[0]!.says).toBe('The manifest is written in UTF-16, not in UTF-8.');
    const latin1 = Uint8Array.from(
      [...'module: hydro\ntitle: na']
        .map((c) => c.charCodeAt(0))
        .concat(
          [0xef],
          [...'ve\n'].map((c) => c.charCodeAt(0)),
        ),
    );
    expect(lines(one(latin1))).toEqual(['modules/hydro.yaml:2:10 manifest-unreadable']);
    expect(one(latin1)[0]!.says).toContain('Byte 0xef is not UTF-8');
    expect(lines(one('module: hydro\ntitle: a\u001b[31m\n'))).toEqual(['modules/hydro.yaml:2:9 manifest-unreadable']);
    expect(lines(one('module: hydro\ntitle: "a\\e[31m"\n'))).toContain('modules/hydro.yaml:2:8 manifest-invalid');
  });

  it('of many megabytes is refused before it is parsed', () => {
    const start = performance.now();
    const findings = one(new Uint8Array(10_000_000).fill(0x61));
    expect(findings[0]!.says).toBe('The manifest holds 10.0 MB; the largest that is read is 1 MB.');
    expect(performance.now() - start).toBeLessThan(10_000);
  });

  it('that multiplies itself through aliases is measured and refused', () => {
    let bomb = 'a0: &a0 [x, x, x, x, x, x, x, x, x]\n';
    for (let i = 1; i < 30; i++)
      bomb += `a${i}: &a${i} [${Array(9)
        .fill(`*a${i - 1}`)
        .join(', ')}]\n`;
    const start = performance.now();
    const findings = one(bomb);
    expect(findings.map((each) => each.kind)).toEqual(['manifest-unreadable']);
    expect(findings[0]!.says).toMatch(/^With its aliases written out this manifest would hold [\d,.e+]+ values/);
    expect(performance.now() - start).toBeLessThan(10_000);
  });

  it('that nests without end is refused, in brackets, braces and dashes', () => {
    for (const deep of ['['.repeat(200_000), '{a: '.repeat(50_000), '- '.repeat(100_000), '? '.repeat(50_000)]) {
      const start = performance.now();
      const findings = one(deep);
      expect(findings.map((each) => each.kind)).toEqual(['manifest-unreadable']);
      expect(findings[0]!.says).toContain('nested more than 60 deep');
      expect(performance.now() - start).toBeLessThan(10_000);
    }
  });

  it('of very many marks is given up before it keeps anyone waiting', () => {
    for (const mark of ['"', '\n', '&a ', '*a ', '"a" ']) {
      const findings = one(mark.repeat(Math.floor(999_000 / mark.length)));
      expect(findings[0]!.says).toMatch(/^The manifest holds more than 300,000 words and marks/);
    }
  });

  it('with very many keys takes time in proportion to its length', () => {
    const start = performance.now();
    const findings = one(Array.from({ length: 40_000 }, (_, i) => `key-${i}: value`).join('\n'));
    expect(findings.length).toBe(101);
    expect(findings.some((each) => each.says.endsWith('more problems follow in this file.'))).toBe(true);
    expect(performance.now() - start).toBeLessThan(10_000);
  });

  it('never makes the loader throw, whatever the bytes', () => {
    fc.assert(
      fc.property(fc.uint8Array({ maxLength: 400 }), (content) => {
        const { findings } = loadManifests(new Map([['manifests/modules/x.yaml', content]]));
        expect(findings.length).toBeGreaterThan(0);
      }),
    );
  });

  it('never makes the loader throw, whatever is cut out of or put into sound manifests', () => {
    const paths = Object.keys(SOUND);
    fc.assert(
      fc.property(
        fc.constantFrom(...paths),
        fc.nat(),
        fc.nat({ max: 30 }),
        fc.oneof(
          fc.string({ maxLength: 12 }),
          fc.constantFrom(
            '*a',
            '&a ',
            '!!x ',
            '"',
            "'",
            '|',
            '>',
            '{',
            '}',
            '[',
            ']',
            ': ',
            '- ',
            '\t',
            '\n---\n',
            '<<: ',
            '~',
            '.inf',
            '.nan',
            '__proto__: 1\n',
          ),
        ),
        (path, at, length, put) => {
          const text = SOUND[path]!;
          const start = at % text.length;
          const { findings } = load({ [path]: text.slice(0, start) + put + text.slice(start + length) });
          for (const finding of findings) {
            expect(finding.place.line).toBeGreaterThan(0);
            expect(finding.place.column).toBeGreaterThan(0);
            expect(finding.next.length).toBeGreaterThan(0);
            expect(findingText(finding, WIDE)).not.toMatch(/undefined|\[object/);
          }
        },
      ),
      { numRuns: 300 },
    );
  });
});
