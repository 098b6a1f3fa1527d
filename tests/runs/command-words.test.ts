import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { CommandMistake, fillCommand, splitCommand } from '../../src/runs/command-words.ts';
import { quoted } from '../../src/runs/slurm-task.ts';

describe('splitCommand', () => {
  it.each([
    ['node build/run.js --out {out}', ['node', 'build/run.js', '--out', '{out}']],
    [`echo 'two words' "and \\"more\\""`, ['echo', 'two words', 'and "more"']],
    ['a\\ b c', ['a b', 'c']],
    [`x ''`, ['x', '']],
    [`pre'fix'ed`, ['prefixed']],
    // Nothing here is for a shell to see.
    [
      'echo $HOME *.f > out; rm -rf / & `id` | cat',
      ['echo', '$HOME', '*.f', '>', 'out;', 'rm', '-rf', '/', '&', '`id`', '|', 'cat'],
    ],
  ])('splits %s', (command, words) => {
    expect(splitCommand(command)).toEqual(words);
  });

  it.each([['echo "open'], ["echo 'open"], ['echo \\'], [''], ['   ']])('refuses %j', (command) => {
    expect(() => splitCommand(command)).toThrow(CommandMistake);
  });

  it('gives back any words that were quoted', () => {
    fc.assert(
      fc.property(fc.array(fc.string(), { minLength: 1 }), (words) => {
        const quotedWords = words.map((word) => `'${word.replaceAll("'", `'"'"'`)}'`);
        expect(splitCommand(quotedWords.join(' '))).toEqual(words);
      }),
    );
  });
});

describe('fillCommand', () => {
  it('never makes a second word of a value', () => {
    expect(fillCommand(['run', '--out={out}'], { out: '/a b; c' })).toEqual(['run', '--out=/a b; c']);
  });

  it('fills nothing into what a value brought in', () => {
    expect(fillCommand(['{out}'], { out: '{root}', root: 'x' })).toEqual(['{root}']);
  });

  it('leaves braces that are no place, and refuses a place without a value', () => {
    expect(fillCommand(["require('fs'){}", '{x,y}'], {})).toEqual(["require('fs'){}", '{x,y}']);
    expect(() => fillCommand(['{select.EOS}'], { 'select.RATES': 'fit' })).toThrow(
      '{select.EOS} has no value here (there are {select.RATES})',
    );
    expect(() => fillCommand(['{select.constructor}'], {})).toThrow(CommandMistake);
  });
});

describe('quoted', () => {
  it('is read back as one word by the rules of the standard shell for single quotes', () => {
    expect(quoted(`it's $HOME`)).toBe(`'it'\\''s $HOME'`);
  });
});
