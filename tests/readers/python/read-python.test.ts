import { spawnSync } from 'node:child_process';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readPython } from '../../../src/readers/python/read-python.ts';
import { describeWith, PYTHON } from '../../support/tools.ts';

const SOURCE = `"""Module."""
from dataclasses import dataclass
K_B = 1.380649e-23  # J/K

def pressure(rho, temp=300.0, *args, mu: float = 1.0, **kwargs):
    """Pressure of a gas.

    Parameters
    ----------
    rho : float
        density [kg/m^3]
    """
    def inner(x, /, y):
        return x
    return rho * K_B * temp, inner

@dataclass
class State:
    rho: float
    temp: float = 300.0

    @property
    def hot(self):
        return self.temp > 1e4

    async def run(self, steps, *, every=1): pass

p, q = pressure(1.0, temp=2.0)
f = lambda x, y: (x,
                  y)
if True: pass
else:
    def late(a,
             b=(1, 2),
             ): return a
`;

/** Name, line and arguments of every function, as Python's own parser sees them. */
const JUDGE = `
import ast, json, sys
out = []
for n in ast.walk(ast.parse(sys.stdin.read())):
    if isinstance(n, (ast.FunctionDef, ast.AsyncFunctionDef)):
        a = n.args
        names = [x.arg for x in a.posonlyargs + a.args] + ([a.vararg.arg] if a.vararg else []) + [x.arg for x in a.kwonlyargs] + ([a.kwarg.arg] if a.kwarg else [])
        out.append([n.name, n.lineno, names])
print(json.dumps(sorted(out)))
`;

const seen = (text: string) =>
  readPython('m.py', Buffer.from(text))
    .procedures.map((one) => [one.name, one.line, one.args.map((arg) => arg.name.replace(/^\*+/, ''))])
    .sort((a, b) => (JSON.stringify(a) < JSON.stringify(b) ? -1 : 1));

function judged(text: string): unknown[] {
  const { stdout, status } = spawnSync(PYTHON, ['-c', JUDGE], { input: text, encoding: 'utf8' });
  expect(status).toBe(0);
  return (JSON.parse(stdout) as unknown[]).sort((a, b) => (JSON.stringify(a) < JSON.stringify(b) ? -1 : 1));
}

describeWith(['python3'], 'the reader of Python, judged by its ast module', () => {
  it('sees every function with its arguments in order', () => {
    expect(seen(SOURCE)).toEqual(judged(SOURCE));
    expect(seen(SOURCE).length).toBe(5);
  });

  it('does so for generated signatures', () => {
    const name = fc.constantFrom('rho', 'temp', 'x1', 'e_int', 'λ');
    const value = fc.constantFrom('1', '(1, 2)', '"a, b"', '{"k": [1]}', 'None', 'f(1, y=2)');
    const list = fc.uniqueArray(name, { maxLength: 4 }).chain((names) =>
      fc
        .tuple(...names.map((one) => fc.option(value).map((given) => (given === null ? one : `${one}=${given}`))))
        .map((parts) => {
          const sorted = [...parts].sort((a, b) => Number(a.includes('=')) - Number(b.includes('=')));
          return sorted.join(', ');
        }),
    );
    const definition = fc.tuple(
      fc.constantFrom('def', 'async def'),
      list,
      fc.constantFrom('', ' -> float', ' -> "a: b"'),
    );
    const programs = fc
      .array(definition, { minLength: 1, maxLength: 6 })
      .map((all) =>
        all.map(([word, args, result], at) => `${word} f${at}(${args})${result}:\n    return ${at}\n`).join('\n'),
      );
    fc.assert(
      fc.property(programs, (text) => {
        expect(seen(text)).toEqual(judged(text));
      }),
      { numRuns: 25 },
    );
  });
});

describe('the reader of Python', () => {
  const read = readPython('m.py', Buffer.from(SOURCE));

  it('takes units from docstrings as claims', () => {
    expect(read.claims).toContainEqual(expect.objectContaining({ name: 'rho', what: 'unit', value: 'kg/m^3' }));
  });

  it('sees constants, calls with keywords and how their results are unpacked', () => {
    expect(read.constants.find((one) => one.name === 'K_B')?.value).toBe(1.380649e-23);
    expect(read.calls.find((one) => one.callee === 'pressure')).toMatchObject({
      unpacked: ['p', 'q'],
      args: [{}, { keyword: 'temp' }],
    });
  });

  it('skips Python 2 with a note', () => {
    expect(readPython('old.py', Buffer.from('def f(x):\n    print x\n')).incomplete.length).toBeGreaterThan(0);
  });

  it('never throws, whatever the bytes', () => {
    fc.assert(fc.property(fc.uint8Array({ maxLength: 300 }), (bytes) => void readPython('m.py', bytes)));
    const tokens = fc.array(
      fc.constantFrom(
        'def ',
        'class ',
        'f',
        '(',
        ')',
        ':',
        '\n',
        '    ',
        '"""',
        "'",
        '#',
        ',',
        '*',
        '=',
        'lambda ',
        '\\\n',
        '\t',
      ),
      { maxLength: 40 },
    );
    fc.assert(fc.property(tokens, (parts) => void readPython('m.py', Buffer.from(parts.join('')))));
  });

  it('takes time in proportion to the bytes, also where brackets never close', () => {
    const hard = [
      '(',
      '[',
      'f(',
      'def f(a, ',
      'class A(',
      '"""',
      'if x:\n ',
      'f(a=',
      'lambda x: ',
      'a, b = f(1)\n',
      'x = f(y=g(z), ',
      '@a\n',
      'a.b.',
      '\\\n',
      'f(x for x in ',
      '{a: ',
      '(f(1)).g(',
      "f'{x}' ",
      '# [K]\n',
      'from a import b, ',
    ];
    for (const one of hard) {
      const timed = (count: number) => {
        const content = Buffer.from(one.repeat(count));
        const start = process.cpuUsage().user;
        readPython('m.py', content);
        return (process.cpuUsage().user - start) / 1000;
      };
      timed(1000);
      const [short, long] = [Math.min(timed(1000), timed(1000)), Math.min(timed(16_000), timed(16_000))];
      // Processor time: sixteen times the bytes may take sixteen times as long; the square would be 256 times.
      expect({ one, ratio: long / Math.max(short, 10) < 128 }).toEqual({ one, ratio: true });
    }
  }, 300_000);
});
