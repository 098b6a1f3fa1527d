/** The forms that a text in a manifest can have: a pattern for the JSON Schema, and what to say when a text has another form. */
import semver from 'semver';
import { anyOf, quoted } from './problem.ts';

export interface TextForm {
  /** What it is, to stand behind "is not": `a name`. */
  readonly title: string;
  /** ECMAScript regular expression, with the `u` flag. */
  readonly pattern: string;
  /** True where YAML reads the form as a number when it is not in quotes, and no harm is done: the unit `1`. */
  readonly numberToo?: boolean;
  /** What the pattern cannot say; null when sound. */
  check?(text: string): { readonly says: string; readonly next: string } | null;
  /** What to write in place of a text that does not match the pattern. */
  mend(text: string): string;
}

// The pattern that semver.org publishes for versions (Semantic Versioning 2.0.0, FAQ), without its groups.
const VERSION =
  '^(0|[1-9][0-9]*)\\.(0|[1-9][0-9]*)\\.(0|[1-9][0-9]*)(-((0|[1-9][0-9]*|[0-9]*[a-zA-Z-][0-9a-zA-Z-]*)(\\.(0|[1-9][0-9]*|[0-9]*[a-zA-Z-][0-9a-zA-Z-]*))*))?(\\+([0-9a-zA-Z-]+(\\.[0-9a-zA-Z-]+)*))?$';

export const TEXT_FORMS = {
  prose: {
    title: 'a text',
    pattern: '^[^\\u0000-\\u0008\\u000b-\\u001f\\u007f-\\u009f]+$',
    mend: () => 'write some words, without control characters.',
  },
  name: {
    title: 'a name',
    pattern: '^[A-Za-z][A-Za-z0-9]*([._-][A-Za-z0-9]+)*$',
    mend: (text) => `write a name of letters, digits and hyphens${suggestName(text)}.`,
  },
  /** A name as a language spells it, or a data set in a file: anything on one line. */
  symbol: {
    title: 'a name in the code',
    pattern: '^[^\\s\\u0000-\\u001f\\u007f-\\u009f]+( [^\\s\\u0000-\\u001f\\u007f-\\u009f]+)*$',
    mend: () => 'write the name as the code spells it, on one line.',
  },
  variable: {
    title: 'the name of a variable',
    pattern: '^[A-Za-z_][A-Za-z0-9_]*$',
    mend: () => 'write a name of letters, digits and underscores.',
  },
  version: {
    title: 'a version',
    pattern: VERSION,
    mend: (text) => {
      const full = semver.valid(semver.coerce(text));
      return full === null
        ? 'write three numbers as Semantic Versioning 2.0.0 asks, such as 1.0.0.'
        : `write three numbers as Semantic Versioning 2.0.0 asks: ${full}.`;
    },
  },
  'contract-reference': {
    title: 'a contract and a range of its versions',
    pattern: '^[A-Za-z][A-Za-z0-9]*([._-][A-Za-z0-9]+)* [^ \\u0000-\\u001f].*$',
    mend: (text) =>
      /^[A-Za-z][A-Za-z0-9._-]*$/.test(text)
        ? `say which versions of the contract: "${text} ^1.0".`
        : 'write the name of the contract, a space, and a range of versions: "gas-state ^1.2".',
    check: (text) => {
      const range = text.slice(text.indexOf(' ') + 1);
      return semver.validRange(range) === null
        ? {
            says: `${quoted(range)} is no range of versions.`,
            next: 'write a range such as ^1.2, ~1.2.0, >=1.2 <3 or 1.x.',
          }
        : null;
    },
  },
  unit: {
    title: 'a unit',
    pattern: '^[^\\u0000-\\u001f\\u007f-\\u009f]+$',
    numberToo: true,
    mend: () => 'write a unit such as g/cm3, or 1 for a pure number.',
  },
  path: {
    title: 'a path',
    pattern: '^[^\\u0000-\\u001f\\u007f-\\u009f]+$',
    mend: () => 'write a path from the root of the repository, with / between folders.',
    check: checkPath,
  },
  digest: {
    title: 'a digest',
    pattern: '^sha256:[0-9a-f]{64}$',
    mend: () => 'write "sha256:" and the 64 hexadecimal digits, in lower case, that sha256sum prints.',
  },
  day: {
    title: 'a day',
    pattern: '^[0-9]{4}-[0-9]{2}-[0-9]{2}$',
    mend: () => 'write year, month and day as ISO 8601 does: 2027-01-31.',
    check: (text) => {
      const day = new Date(`${text}T00:00:00Z`);
      return Number.isNaN(day.getTime()) || day.toISOString().slice(0, 10) !== text
        ? { says: `There is no day ${quoted(text)}.`, next: 'write a day that the calendar has, as 2027-01-31.' }
        : null;
    },
  },
  command: {
    title: 'a command',
    pattern: '^[^\\u0000-\\u0008\\u000b-\\u001f\\u007f-\\u009f]+$',
    mend: () => 'write the program and its words, separated by spaces.',
  },
} as const satisfies Record<string, TextForm>;

export type FormName = keyof typeof TEXT_FORMS;

/** Null when the text has the form; else what is wrong and what to write instead. */
export function checkText(form: FormName, value: string): { readonly says: string; readonly next: string } | null {
  const rules: TextForm = TEXT_FORMS[form];
  if (!new RegExp(rules.pattern, 'u').test(value)) {
    return {
      says:
        value === ''
          ? `${rules.title.replace(/^\w/, upper)} is missing here.`
          : `${quoted(value)} is not ${rules.title}.`,
      next: rules.mend(value),
    };
  }
  return rules.check?.(value) ?? null;
}

/** Paths stay inside the repository: relative, with `/`, without `..`, on every system. */
function checkPath(path: string): { says: string; next: string } | null {
  if (/^[/~]|^[A-Za-z]:/.test(path)) {
    return {
      says: `The path ${quoted(path)} leads out of the repository.`,
      next: 'write it from the root of the repository, and bring in what lies elsewhere.',
    };
  }
  if (path.includes('\\')) {
    return {
      says: `The path ${quoted(path)} holds a backslash.`,
      next: `write it with slashes: ${quoted(path.replaceAll('\\', '/'))}.`,
    };
  }
  const parts = path.split('/');
  if (parts.includes('..')) {
    return {
      says: `The path ${quoted(path)} leads out of its folder with "..".`,
      next: 'write it from the root of the repository, without "..".',
    };
  }
  if (parts.some((part) => part === '' || part === '.')) {
    const plain = parts.filter((part) => part !== '' && part !== '.').join('/');
    return { says: `The path ${quoted(path)} has an empty part.`, next: `write ${quoted(plain)}.` };
  }
  if (parts[0] === '.git') {
    return {
      says: `The path ${quoted(path)} leads into git's own files.`,
      next: `name a file of the code, not one of ${anyOf(['.git'])}.`,
    };
  }
  return null;
}

function suggestName(text: string): string {
  const plain = text
    .normalize('NFKD')
    .replace(/[^A-Za-z0-9]+/g, '-')
    .replace(/^[-0-9]+|-+$/g, '')
    .toLowerCase();
  return plain === '' ? ', such as eos-ionising' : `: ${plain}`;
}

function upper(letter: string): string {
  return letter.toUpperCase();
}
