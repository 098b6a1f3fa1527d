/** `mortise unit FROM [TO]`: what a unit string means, and the factor to another. `-` reads tab-separated pairs from standard input. */
import { printable } from '../model/printable.ts';
import { EDITIONS, type Edition } from '../units/constant-values.ts';
import { type ConversionOptions, conversion } from '../units/conversion.ts';
import { EQUIVALENCES, MASS_BASES } from '../units/equivalence.ts';
import { toNumber } from '../units/rational.ts';
import { type Reading, readUnit, type UnitProblem, type UnitSyntax } from '../units/read-unit.ts';
import { dimensionText, factorText, factorValue, isExact } from '../units/unit.ts';
import { type Command, EXIT, type ExitStatus, UsageError } from './command.ts';

const SYNTAXES = ['ucum', 'vounits', 'udunits', 'freehand'];

export const command: Command = {
  name: 'unit',
  answers: 'factor, dimension and readings of a unit string',
  usage: 'mortise unit FROM [TO] | mortise unit -',
  options: {
    syntax: { type: 'string', value: 'NAME', says: `hold the strings to one syntax: ${SYNTAXES.join(', ')}` },
    equivalence: {
      type: 'string',
      value: 'NAME',
      says: `the relation that may change the dimension: ${Object.keys(EQUIVALENCES).join(', ')}`,
    },
    'mass-basis': {
      type: 'string',
      value: 'NAME',
      says: `the mass of one counted thing, from per baryon to per gram: ${Object.keys(MASS_BASES).join(', ')}`,
    },
    edition: { type: 'string', value: 'YEAR', says: `CODATA edition of measured constants: ${EDITIONS.join(', ')}` },
  },
  help: [
    'Reads UCUM, VOUnits, UDUNITS and spellings found in comments, and tells them apart by what the text holds.',
    'With "-", reads one pair a line from standard input, FROM and TO apart by a tab; with --json, answers one JSON line for each.',
    '',
    '  mortise unit "erg/cm^3" Pa',
    '  mortise unit keV K --equivalence thermal',
    '  mortise unit MeV/baryon erg/g --mass-basis m_u',
  ].join('\n'),
  async run({ words, options }, { stdin, out, err }): Promise<ExitStatus> {
    const settings = conversionOptions(options);
    const json = options.json === true;
    const [from, to, ...rest] = words;
    if (from === undefined || rest.length > 0) throw new UsageError('mortise unit takes FROM and, where wanted, TO');
    if (from !== '-') {
      const answer = answerPair(from, to, settings);
      if (json) out(`${JSON.stringify(answer)}\n`);
      else if (answer.error === undefined) out(text(answer));
      else err(text(answer));
      return answer.error === undefined ? EXIT.ok : EXIT.stop;
    }
    let refused = false;
    let number = 0;
    for await (const line of lines(stdin)) {
      number++;
      if (line.trim() === '') continue;
      const [left, right, relation] = line.split('\t');
      const answer = answerPair(left!, right === '' ? undefined : right, named(settings, relation));
      refused ||= answer.error !== undefined;
      if (json) out(`${JSON.stringify(answer)}\n`);
      else out(answer.error === undefined ? text(answer) : `line ${number}: ${text(answer)}`);
    }
    return refused ? EXIT.stop : EXIT.ok;
  },
};

interface Answer {
  readonly from: string;
  readonly to: string | null;
  /** value in `to` = factor * value in `from` + offset; without TO, to SI base units. */
  readonly factor: number | null;
  readonly factorText?: string;
  readonly offset?: number;
  readonly exact?: boolean;
  readonly dimension: Readonly<Record<string, number>> | null;
  readonly dimensionText?: string;
  readonly counted?: Readonly<Record<string, number>>;
  readonly syntax: UnitSyntax | null;
  readonly uses?: readonly string[];
  readonly readings?: readonly { readonly says: string; readonly dimension: Readonly<Record<string, number>> | null }[];
  readonly error?: UnitProblem & { readonly reason?: string };
}

function answerPair(from: string, to: string | undefined, settings: ConversionOptions): Answer {
  const reading = readUnit(from, settings);
  const about = {
    from,
    to: to ?? null,
    dimension: 'error' in reading ? null : reading.unit.dimension,
    syntax: 'error' in reading ? null : reading.syntax,
    ...('error' in reading ? {} : { dimensionText: dimensionText(reading.unit) }),
    ...('error' in reading || Object.keys(reading.unit.counted).length === 0 ? {} : { counted: reading.unit.counted }),
    ...('error' in reading || reading.readings === undefined ? {} : { readings: reading.readings.map(readingAnswer) }),
  };
  if ('error' in reading) return { ...about, factor: null, error: reading.error };
  if (to === undefined) {
    const { factor, zero } = reading.unit;
    return {
      ...about,
      factor: factorValue(factor),
      factorText: factorText(factor),
      ...(zero === undefined ? {} : { offset: toNumber(zero) }),
      exact: isExact(factor),
      ...(factor.uses.length === 0 ? {} : { uses: factor.uses }),
    };
  }
  const answer = conversion(from, to, settings);
  if ('error' in answer) return { ...about, factor: null, error: { ...answer.error, reason: answer.reason } };
  return {
    ...about,
    dimension: answer.dimension,
    factor: answer.factor,
    factorText: answer.factorText,
    ...(answer.offset === 0 ? {} : { offset: answer.offset }),
    exact: answer.exact,
    ...(answer.uses === undefined ? {} : { uses: answer.uses }),
  };
}

function readingAnswer({ unit, says }: Reading): { says: string; dimension: Readonly<Record<string, number>> | null } {
  return { says, dimension: unit === null ? null : unit.dimension };
}

function text(answer: Answer): string {
  const from = printable(answer.from);
  if (answer.error !== undefined) {
    const { says, column, width, suggestion, reason } = answer.error;
    const placed = reason === undefined || reason === 'unreadable-from' || reason === 'unreadable-to';
    const shown = printable(reason === 'unreadable-to' ? (answer.to ?? '') : answer.from);
    const mark = placed ? `\n  ${shown}\n  ${' '.repeat(column - 1)}${'^'.repeat(Math.min(width, 80))}` : '';
    const next = suggestion === undefined ? '' : `\nNext: ${placed ? 'write ' : ''}${printable(suggestion)}.`;
    return `${placed ? `"${shown}", column ${column}` : `"${from}" to "${printable(answer.to ?? '')}"`}: ${printable(says)}.${mark}${next}\n${readingLines(answer)}`;
  }
  const target = answer.to === null ? (answer.dimensionText ?? '') : printable(answer.to);
  const offset =
    answer.offset === undefined ? '' : ` (and ${answer.offset > 0 ? 'add' : 'take away'} ${Math.abs(answer.offset)})`;
  const factor = answer.factor === null ? '' : `${from} = ${answer.factor} ${target}${offset}`;
  const exact =
    answer.factorText !== undefined && answer.factorText !== String(answer.factor)
      ? `  exactly ${answer.factorText}\n`
      : '';
  const uses = answer.uses === undefined ? '' : `  uses ${answer.uses.join(', ')}\n`;
  return `${factor}\n${answer.exact === true ? exact : ''}  dimension ${answer.dimensionText}; read as ${answer.syntax}\n${uses}${readingLines(answer)}`;
}

function readingLines({ readings }: Answer): string {
  if (readings === undefined) return '';
  return `  ambiguous; its readings:\n${readings.map(({ says }) => `    ${printable(says)}\n`).join('')}`;
}

function conversionOptions(options: Readonly<Record<string, unknown>>): ConversionOptions {
  const [syntax, edition] = [options.syntax, options.edition];
  if (syntax !== undefined && !SYNTAXES.includes(syntax as string))
    throw new UsageError(`--syntax takes ${SYNTAXES.join(', ')}`);
  if (edition !== undefined && !EDITIONS.includes(edition as Edition))
    throw new UsageError(`--edition takes ${EDITIONS.join(', ')}`);
  return {
    ...(syntax === undefined ? {} : { syntax: syntax as UnitSyntax }),
    ...(edition === undefined ? {} : { edition: edition as Edition }),
    ...named(options.equivalence === undefined ? {} : { equivalence: options.equivalence as string }, undefined),
    ...(options['mass-basis'] === undefined ? {} : { massBasis: options['mass-basis'] as string }),
  };
}

/** The third column of a pair names an equivalence or a mass basis for that line. */
function named(settings: ConversionOptions, relation: string | undefined): ConversionOptions {
  if (relation === undefined || relation === '') return settings;
  return Object.hasOwn(MASS_BASES, relation)
    ? { ...settings, massBasis: relation }
    : { ...settings, equivalence: relation };
}

async function* lines(input: NodeJS.ReadableStream): AsyncGenerator<string> {
  let rest = '';
  const decoder = new TextDecoder();
  for await (const chunk of input) {
    rest += typeof chunk === 'string' ? chunk : decoder.decode(chunk, { stream: true });
    const whole = rest.split('\n');
    rest = whole.pop()!;
    for (const line of whole) yield line.replace(/\r$/, '');
  }
  rest += decoder.decode();
  if (rest !== '') yield rest.replace(/\r$/, '');
}
