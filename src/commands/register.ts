/** `mortise register …`: which module versions produced which published result. */
import { createHash } from 'node:crypto';
import { basename, isAbsolute, join, relative, resolve } from 'node:path';
import { parse } from 'yaml';
import { unseal } from '../audit/clearance.ts';
import { environmentHere } from '../audit/gather.ts';
import { type Finding, hasStop } from '../model/finding.ts';
import { printable, printableLines } from '../model/printable.ts';
import { decodeText } from '../readers/read-source.ts';
import type { StandingEntry } from '../register/chain.ts';
import { type CodeNow, entryFromCode, entryMistakes } from '../register/entry-from-code.ts';
import { EXPORT_FORMS, type ExportForm, exportEntry } from '../register/exports/export-entry.ts';
import type { Query } from '../register/find.ts';
import { dayOf, resultText, standingText } from '../register/find.ts';
import { canonicalOrcid, readArxiv, readDoi } from '../register/identifiers.ts';
import { importCsv } from '../register/import-csv.ts';
import { plainYaml } from '../register/plain-yaml.ts';
import type { Digested, Entry, Person, Remaking, Result } from '../register/record.ts';
import { Register, writerFrom } from '../register/register.edge.ts';
import { judgeRemaking } from '../register/remake.ts';
import { verifyRegister } from '../register/verify.edge.ts';
import { findingsText } from '../report/finding-text.ts';
import { sectionText } from '../report/report-text.ts';
import { contentId } from '../runs/key.ts';
import { digestOf as digestOfFile } from '../runs/reference-files.edge.ts';
import { rerunCases } from '../runs/rerun.ts';
import { listTree } from '../runs/tree-files.edge.ts';
import { SourceProblem } from '../sources/source-problem.ts';
import { openQuestions } from './ask-line.edge.ts';
import {
  type Command,
  EXIT,
  type ExitStatus,
  type Invocation,
  type OptionSpec,
  type Surroundings,
  UsageError,
} from './command.ts';
import { askEntry } from './entry-questions.ts';
import { readWhole, realPath } from './files.edge.ts';
import { openCode } from './open-code.ts';
import { SIGN, SIGNERS, signerOf } from './signing.ts';
import { textOptions } from './text-options.ts';

const RESULT_OPTIONS: Readonly<Record<string, OptionSpec>> = {
  title: { type: 'string', value: 'TEXT', says: 'what the result is called' },
  doi: { type: 'string', value: 'DOI', says: 'publication or data set' },
  arxiv: { type: 'string', value: 'ID', says: 'preprint' },
  thesis: { type: 'string', value: 'TEXT', says: 'thesis, by author, place and year' },
  dataset: { type: 'string', value: 'TEXT', says: 'data set that has no DOI' },
  campaign: { type: 'string', value: 'NAME', says: 'internal campaign' },
  figure: { type: 'string', value: 'NUMBER', says: 'figure of the publication' },
  table: { type: 'string', value: 'NUMBER', says: 'table of the publication' },
};

export const command: Command = {
  name: 'register',
  answers: 'which module versions produced which published result',
  usage: 'mortise register add|import|list|show|find|amend|withdraw|verify|remake|export [WORDS]',
  options: {
    ...RESULT_OPTIONS,
    person: {
      type: 'string',
      multiple: true,
      value: 'TEXT',
      says: '"Name, ORCID iD, role"; with find: part of a name or an ORCID iD',
    },
    output: { type: 'string', multiple: true, value: 'FILE', says: 'a result file; its digest is recorded' },
    input: { type: 'string', multiple: true, value: 'FILE', says: 'an input file; its digest is recorded' },
    kept: { type: 'string', value: 'TEXT', says: 'where the outputs are kept' },
    published: { type: 'string', value: 'DATE', says: 'day of publication, YYYY-MM-DD' },
    note: { type: 'string', value: 'TEXT', says: 'anything a successor should know' },
    clearance: { type: 'string', value: 'FILE', says: 'the clearance file under which it was made' },
    from: {
      type: 'string',
      value: 'FILE',
      says: 'with add and amend: parts of the entry from a YAML file; with find: first day',
    },
    to: { type: 'string', value: 'DATE', says: 'with find: last day' },
    module: { type: 'string', value: 'NAME', says: 'with find: results that used this module' },
    versions: { type: 'string', value: 'RANGE', says: 'with find: of these versions, a semver range' },
    component: { type: 'string', value: 'NAME', says: 'with find: that filled this component' },
    content: { type: 'string', value: 'ID', says: 'with find: results that name this SWHID, git id or digest' },
    case: { type: 'string', value: 'NAME', says: 'with find: results made when this case was validated' },
    result: { type: 'string', value: 'ID', says: 'with find: DOI, arXiv id or part of a title' },
    machine: { type: 'string', value: 'TEXT', says: 'with find: part of what is recorded of the machine' },
    standing: { type: 'string', value: 'TEXT', says: 'with find: recorded, withdrawn, remade bit-for-bit, ...' },
    reason: { type: 'string', value: 'TEXT', says: 'with withdraw: why' },
    form: { type: 'string', value: 'FORM', says: `with export: ${EXPORT_FORMS.join(', ')}` },
    sign: SIGN,
    first: { type: 'string', value: 'N', says: 'with list and find: how many to show; 40 when absent' },
  },
  help: `
Records are kept as plain YAML, one file each and sealed, under manifests/register/ in the code's repository. Nothing is
overwritten: to correct an entry, amend it; to take it back, withdraw it.

  mortise register add --doi 10.1000/182 --figure 4 --person "R. Vale, 0000-0002-1825-0097, author" --output profile.csv
  mortise register find --module eos-ionising --versions ">=2.0.3 <2.1.2"
  mortise register show 2026-03-01-figure-4
  mortise register import old-results.csv      title, doi, people, date, commit, modules, notes
  mortise register remake 2026-03-01-figure-4  build and run it again at its revision
  mortise register verify

With --sign the seal is also signed; "verify" tests every signature and names its signer by manifests/allowed-signers.

"add" fills in revision, modules, versions, contents, contracts and machine from the assembly in the working folder.

Exit status: 0 done; 1 verify found something that is a stop, or nothing was found; 2 wrong usage.`,
  async run(invocation, surroundings) {
    const [verb, ...words] = invocation.words;
    const action = ACTIONS[verb ?? ''];
    if (action === undefined) {
      const known = Object.keys(ACTIONS).join(', ');
      throw new UsageError(
        verb === undefined
          ? `mortise register needs one of ${known}`
          : `mortise register has no "${verb}"; it has ${known}`,
      );
    }
    return action(words, invocation, surroundings);
  },
};

type Action = (words: readonly string[], invocation: Invocation, surroundings: Surroundings) => Promise<ExitStatus>;

const ACTIONS: Readonly<Record<string, Action>> = {
  import: importOld,
  remake,
  add,
  list,
  show,
  find,
  amend,
  withdraw,
  verify,
  export: exportOne,
};

interface Opened {
  readonly register: Register;
  readonly root: string;
  /** Folder of the manifests within the code. */
  readonly manifests: string;
  readonly code: CodeNow;
}

async function open(invocation: Invocation, surroundings: Surroundings): Promise<Opened> {
  const opened = await openCode(invocation, surroundings);
  if (opened.place === null)
    throw new UsageError(
      `${opened.findings[0]?.says ?? 'there is no assembly here.'} The register belongs to an assembly`,
    );
  const { root } = opened.place;
  const listing = await listTree(
    root,
    opened.tree.revision,
    [...opened.set.modules.values()].map((one) => one.file),
  );
  const ids = new Map(listing.files.map((file) => [file.path, file.id]));
  const digests = new Map<string, string | null>();
  for (const { file } of opened.set.modules.values()) {
    const bytes = await opened.tree.read(file);
    digests.set(file, bytes === null ? null : digestOf(bytes));
  }
  return {
    root,
    manifests: opened.place.folder,
    register: new Register(root, signerOf(invocation, surroundings) ?? null),
    code: {
      manifests: opened.set,
      revision: listing.commit,
      contentOf: (file) => contentId(ids.get(file)),
      digestOf: (file) => digests.get(file) ?? null,
      environment: environmentHere(),
    },
  };
}

function digestOf(bytes: Uint8Array): string {
  return `sha256:${createHash('sha256').update(bytes).digest('hex')}`;
}

const text = (invocation: Invocation, name: string): string | undefined => {
  const value = invocation.options[name];
  return typeof value === 'string' && value.trim() !== '' ? value.trim() : undefined;
};
const texts = (invocation: Invocation, name: string): readonly string[] =>
  (invocation.options[name] as readonly string[] | undefined) ?? [];

async function add(words: readonly string[], invocation: Invocation, surroundings: Surroundings): Promise<ExitStatus> {
  if (words.length > 0) throw new UsageError(`mortise register add takes options only; "${words[0]}" was given`);
  const opened = await open(invocation, surroundings);
  const filled = entryFromCode(opened.code);
  const told = await asked(filled, invocation, surroundings);
  if (told === null) {
    surroundings.out('Nothing was recorded.\n');
    return EXIT.usage;
  }
  const given = await entryParts(opened.root, told, surroundings);
  const entry = { ...filled, people: [], result: {}, ...given } as Entry;
  return seal(opened.register, entry, { kind: 'entry' }, told, surroundings);
}

/** On a terminal, what the options leave open is asked for. */
async function asked(
  filled: Pick<Entry, 'code' | 'modules'>,
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<Invocation | null> {
  const { options } = invocation;
  const enough = options.from !== undefined || Object.keys(RESULT_OPTIONS).some((name) => options[name] !== undefined);
  if (enough || !surroundings.stdoutIsTerminal || options.json === true) return invocation;
  const modules = filled.modules.map((one) => `  ${one.component}: ${one.module} ${one.version}\n`).join('');
  const revision = filled.code[0]?.commit ?? 'none: this code is in no git repository';
  const questions = openQuestions(surroundings);
  try {
    const answers = await askEntry(
      questions,
      (name) => options[name] !== undefined,
      printableLines(`Filled in from the code:\n  revision ${revision}\n${modules}`),
    );
    return answers === null ? null : { ...invocation, options: { ...options, ...answers } };
  } finally {
    questions.close();
  }
}

async function amend(
  words: readonly string[],
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<ExitStatus> {
  const { register, root } = await open(invocation, surroundings);
  const before = entryNamed(register, words);
  const given = await entryParts(root, invocation, surroundings);
  if (Object.keys(given).length === 0)
    throw new UsageError('mortise register amend needs what to change, as options or with --from FILE');
  const entry = { ...before.content, ...given, result: { ...before.content.result, ...given.result } };
  return seal(
    register,
    entry,
    { kind: 'amendment', about: before.id, replaces: before.seal },
    invocation,
    surroundings,
  );
}

function seal(
  register: Register,
  entry: Entry,
  how: { kind: 'entry' } | { kind: 'amendment'; about: string; replaces: StandingEntry['seal'] },
  invocation: Invocation,
  surroundings: Surroundings,
): ExitStatus {
  const mistakes = entryMistakes(entry, { orcid: canonicalOrcid, doi: readDoi, arxiv: readArxiv });
  if (mistakes.length > 0) throw new UsageError(`nothing was recorded: ${mistakes.join('; ')}`);
  const record = register.add({
    ...how,
    by: writerFrom(surroundings.env),
    title: titleOf(entry.result),
    content: entry,
  });
  say(
    invocation,
    surroundings,
    record,
    `recorded ${record.about}\nseal ${record.seal}\nCommit manifests/register to keep it.\n`,
  );
  return EXIT.ok;
}

function titleOf({ title, doi, arxiv, thesis, dataset, campaign, figure, table }: Result): string {
  const part = figure === undefined ? (table === undefined ? '' : `table ${table} of `) : `figure ${figure} of `;
  return `${part}${title ?? doi ?? arxiv ?? thesis ?? dataset ?? campaign ?? ''}`;
}

/** What the options and the YAML file give. */
async function entryParts(root: string, invocation: Invocation, surroundings: Surroundings): Promise<Partial<Entry>> {
  const from = text(invocation, 'from');
  const file = from === undefined ? {} : partsFrom(from, await readWhole(surroundings.cwd, from));
  const result = Object.fromEntries(
    Object.keys(RESULT_OPTIONS).flatMap((name) =>
      text(invocation, name) === undefined ? [] : [[name, text(invocation, name)]],
    ),
  );
  const people = texts(invocation, 'person').map(personFrom);
  const kept = text(invocation, 'kept');
  const outputs = await digested(root, texts(invocation, 'output'), surroundings);
  const inputs = await digested(root, texts(invocation, 'input'), surroundings);
  const published = text(invocation, 'published');
  if (published !== undefined && !/^\d{4}-\d\d-\d\d$/.test(published))
    throw new UsageError(`--published ${published}: write the day as YYYY-MM-DD`);
  const notes = text(invocation, 'note');
  const clearance = text(invocation, 'clearance');
  return {
    ...file,
    ...(Object.keys(result).length === 0 ? {} : { result: { ...file.result, ...result } }),
    ...(people.length === 0 ? {} : { people }),
    ...(outputs.length === 0
      ? {}
      : { outputs: kept === undefined ? outputs : outputs.map((one) => ({ ...one, kept })) }),
    ...(inputs.length === 0 ? {} : { inputs }),
    ...(published === undefined ? {} : { dates: { ...file.dates, published } }),
    ...(notes === undefined ? {} : { notes }),
    ...(clearance === undefined ? {} : clearanceParts(clearance, await readWhole(surroundings.cwd, clearance))),
  };
}

function partsFrom(file: string, bytes: Uint8Array): Partial<Entry> {
  try {
    const value: unknown = parse(new TextDecoder('utf-8', { fatal: true }).decode(bytes), {
      schema: 'core',
      maxAliasCount: 0,
    });
    if (typeof value === 'object' && value !== null && !Array.isArray(value)) return value as Partial<Entry>;
  } catch (error) {
    throw new UsageError(`${file} could not be read: ${(error as Error).message}`);
  }
  throw new UsageError(`${file} holds no parts of an entry: result, people, outputs, notes, ...`);
}

/** What was cleared, and how the cases stood then. */
function clearanceParts(file: string, bytes: Uint8Array): Pick<Entry, 'clearance' | 'cases'> {
  const whole = new TextDecoder().decode(bytes);
  const read = unseal(whole);
  if ('broken' in read) throw new UsageError(`${file} is no clearance: ${read.broken}`);
  const { clearance } = read;
  return {
    clearance: { seal: (JSON.parse(whole) as { seal: string }).seal, outcome: clearance.outcome },
    cases: clearance.cases.map((one) => ({
      case: one.case,
      quantity: 'worst',
      class: one.class,
      tolerances: one.tolerances,
    })),
  };
}

async function digested(root: string, files: readonly string[], surroundings: Surroundings): Promise<Digested[]> {
  const realRoot = await realPath(root);
  return Promise.all(
    files.map(async (file) => {
      const place = await realPath(resolve(surroundings.cwd, file));
      const inside = relative(realRoot, place);
      // Inside the code the name says where it lies, so that "verify" finds it again.
      const name = inside.startsWith('..') || isAbsolute(inside) ? basename(place) : inside;
      return { name, digest: await digestOfFile(place) };
    }),
  );
}

/** `Name, ORCID iD, role`: the iD is known by its form. */
function personFrom(words: string): Person {
  const parts = words.split(',').map((part) => part.trim());
  const looksLikeOrcid = (part: string) => /\d{4}-\d{4}-\d{4}-\d{3}[\dX]|orcid\.org/i.test(part);
  const [name = '', ...rest] = parts.filter((part) => !looksLikeOrcid(part));
  const orcid = parts.find(looksLikeOrcid);
  const role = rest.join(', ');
  return {
    name,
    ...(orcid === undefined ? {} : { orcid: canonicalOrcid(orcid) ?? orcid }),
    ...(role === '' ? {} : { role }),
  };
}

async function withdraw(
  words: readonly string[],
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<ExitStatus> {
  const { register } = await open(invocation, surroundings);
  const entry = entryNamed(register, words);
  const reason = text(invocation, 'reason');
  if (reason === undefined) throw new UsageError('mortise register withdraw needs --reason TEXT');
  const record = register.add({
    kind: 'withdrawal',
    about: entry.id,
    replaces: entry.seal,
    by: writerFrom(surroundings.env),
    content: { reason },
  });
  say(invocation, surroundings, record, `withdrawn ${entry.id}: ${printable(reason)}\n`);
  return EXIT.ok;
}

function entryNamed(register: Register, words: readonly string[]): StandingEntry {
  const [name, ...more] = words;
  if (name === undefined || more.length > 0) throw new UsageError('name one entry, or the beginning of its name');
  const entry = register.entry(name);
  if (entry === null)
    throw new UsageError(`there is no entry "${name}", or more than one begins so; "mortise register list" shows them`);
  return entry;
}

async function list(words: readonly string[], invocation: Invocation, surroundings: Surroundings): Promise<ExitStatus> {
  if (words.length > 0)
    throw new UsageError('mortise register list takes no words; "mortise register find" looks for some');
  return listed({}, invocation, surroundings);
}

async function find(words: readonly string[], invocation: Invocation, surroundings: Surroundings): Promise<ExitStatus> {
  const names = [
    'module',
    'versions',
    'component',
    'content',
    'case',
    'from',
    'to',
    'result',
    'machine',
    'standing',
  ] as const;
  const person = texts(invocation, 'person').join(' ');
  const query: Query = {
    ...(words.length === 0 ? {} : { text: words.join(' ') }),
    ...Object.fromEntries(
      names.flatMap((name) => (text(invocation, name) === undefined ? [] : [[name, text(invocation, name)]])),
    ),
    ...(person === '' ? {} : { person }),
  };
  if (Object.keys(query).length === 0) throw new UsageError('mortise register find needs words or options to look for');
  return listed(query, invocation, surroundings);
}

async function listed(query: Query, invocation: Invocation, surroundings: Surroundings): Promise<ExitStatus> {
  const { register } = await open(invocation, surroundings);
  const index = register.index();
  const first = Number(text(invocation, 'first') ?? 40);
  if (!Number.isInteger(first) || first < 1) throw new UsageError('--first takes a whole number from 1');
  const [count, entries] = [index.count(query), index.find(query, 0, first)];
  register.close();
  const section = {
    title: `${count} ${count === 1 ? 'result' : 'results'}`,
    head: ['day', 'entry', 'result', 'standing'],
    rows: entries.map((one) => [one.day, one.id, one.result, one.standing]),
    lines: count > entries.length ? [`the first ${entries.length} are shown; --first N shows more`] : [],
  };
  say(invocation, surroundings, { count, entries }, `${sectionText(section, textOptions(invocation, surroundings))}\n`);
  return count > 0 || Object.keys(query).length === 0 ? EXIT.ok : EXIT.stop;
}

async function show(words: readonly string[], invocation: Invocation, surroundings: Surroundings): Promise<ExitStatus> {
  const { register } = await open(invocation, surroundings);
  const entry = entryNamed(register, words);
  const head = `${entry.id}\n${printable(resultText(entry.content.result))}\n${dayOf(entry)}  ${standingText(entry)}${entry.because === undefined ? '' : `: ${printable(entry.because)}`}\n`;
  const withdrawn = entry.withdrawn === null ? '' : `withdrawn: ${printable(entry.withdrawn)}\n`;
  const body = plainYaml(JSON.parse(JSON.stringify(entry.content)));
  const records = entry.records
    .map(
      ({ file, record }) =>
        `  ${record.written.slice(0, 10)}  ${record.kind}  by ${printable(record.by.name)}  ${file}`,
    )
    .join('\n');
  say(
    invocation,
    surroundings,
    entry,
    `${head}${withdrawn}\n${body.split('\n').map(printable).join('\n')}\nrecords\n${records}\n`,
  );
  return EXIT.ok;
}

async function verify(
  words: readonly string[],
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<ExitStatus> {
  if (words.length > 0) throw new UsageError('mortise register verify takes no words');
  const { register, root, manifests } = await open(invocation, surroundings);
  const { records, signed, named, findings } = await verifyRegister(register.folder, {
    root,
    signers: join(root, manifests, SIGNERS),
  });
  const placed = findings.map(
    (one): Finding => ({ ...one, place: { ...one.place, file: `manifests/register/${one.place.file}` } }),
  );
  say(
    invocation,
    surroundings,
    { records, signed, named, findings: placed },
    `${records} records read, every seal made again, ${signed} signatures tested\n${named.held + named.away === 0 ? '' : `${named.held} files that entries name are as recorded, ${named.away} are not here\n`}${findingsText(placed, textOptions(invocation, surroundings))}`,
  );
  return hasStop(placed) ? EXIT.stop : EXIT.ok;
}

async function exportOne(
  words: readonly string[],
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<ExitStatus> {
  const form = text(invocation, 'form') ?? 'ro-crate';
  if (!EXPORT_FORMS.includes(form as ExportForm))
    throw new UsageError(`--form ${form}: the forms are ${EXPORT_FORMS.join(', ')}`);
  const { register } = await open(invocation, surroundings);
  surroundings.out(exportEntry(entryNamed(register, words), form as ExportForm));
  return EXIT.ok;
}

/** A spreadsheet of old results: every good row becomes an entry; the others are told by line and nothing of them is lost. */
async function importOld(
  words: readonly string[],
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<ExitStatus> {
  const [file, ...more] = words;
  if (file === undefined || more.length > 0) throw new UsageError('mortise register import takes one CSV file');
  const { register } = await open(invocation, surroundings);
  const { rows, problems } = importCsv(decodeText(await readWhole(surroundings.cwd, file)));
  const by = writerFrom(surroundings.env);
  const recorded = rows.map(({ line, title, entry }) => ({
    line,
    about: register.add({ kind: 'entry', by, title, content: entry }).about,
  }));
  const lines = [
    ...recorded.map((one) => `line ${one.line}: recorded ${one.about}`),
    ...problems.map((one) => `line ${one.line}: ${printable(one.says)}`),
    `${recorded.length} of ${rows.length + problems.filter((one) => one.line > 1).length} rows recorded`,
  ];
  say(invocation, surroundings, { recorded, problems }, `${lines.join('\n')}\n`);
  return problems.some((one) => one.line > 1) ? EXIT.stop : EXIT.ok;
}

/** Builds and runs the recorded cases at the recorded revision, and records what came of it. */
async function remake(
  words: readonly string[],
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<ExitStatus> {
  const { register, root } = await open(invocation, surroundings);
  const entry = entryNamed(register, words);
  const content = await runAgain(root, entry.content, invocation, surroundings);
  if (surroundings.signal.aborted) return EXIT.interrupted;
  register.add({ kind: 'remaking', about: entry.id, by: writerFrom(surroundings.env), content });
  say(
    invocation,
    surroundings,
    { entry: entry.id, ...content },
    `${entry.id}: ${content.standing}${content.because === undefined ? '' : `: ${printable(content.because)}`}\n`,
  );
  return content.standing === 'cannot be tried'
    ? EXIT.incomplete
    : content.standing === 'not remade'
      ? EXIT.stop
      : EXIT.ok;
}

async function runAgain(
  root: string,
  entry: Entry,
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<Remaking> {
  const environment = environmentHere();
  const nothing = { revision: null, outcomes: [], contentOf: () => null, environment };
  const commit = entry.code[0]?.commit;
  if (commit === undefined) return judgeRemaking(entry, nothing);
  let then: Awaited<ReturnType<typeof openCode>>;
  try {
    then = await openCode({ ...invocation, options: { ...invocation.options, at: commit } }, surroundings);
  } catch (error) {
    if (error instanceof SourceProblem) return judgeRemaking(entry, nothing);
    throw error;
  }
  if (then.place === null) return judgeRemaking(entry, nothing);
  const recorded = [...new Set((entry.cases ?? []).map((one) => one.case))].filter((name) => then.set.cases.has(name));
  const cases = recorded.length > 0 ? recorded : [...then.set.cases.keys()];
  const outcomes = await rerunCases({
    root,
    manifests: then.set,
    manifestFolder: then.place.folder,
    cases,
    at: commit,
    env: surroundings.env,
    signal: surroundings.signal,
    fresh: true,
  });
  const ids = new Map((await listTree(root, commit)).files.map((file) => [file.path, file.id]));
  return judgeRemaking(entry, {
    revision: commit,
    contentOf: (file) => contentId(ids.get(file)),
    environment,
    outcomes: await Promise.all(
      outcomes.map(async (one) => ({
        case: one.case,
        state: one.state,
        why: one.why,
        class: one.class,
        worst: one.deviations.find((each) => each.class === one.class)?.quantity ?? null,
        outputs:
          one.result === null
            ? {}
            : await outputDigests(
                one.result,
                then.set.cases.get(one.case)?.value.outputs.map((output) => output.file) ?? [],
              ),
      })),
    ),
  });
}

async function outputDigests(folder: string, files: readonly string[]): Promise<Record<string, string>> {
  return Object.fromEntries(
    await Promise.all(files.map(async (file) => [file, await digestOfFile(join(folder, file))])),
  );
}

function say(invocation: Invocation, surroundings: Surroundings, value: unknown, plain: string): void {
  surroundings.out(invocation.options.json === true ? `${JSON.stringify(value, null, 2)}\n` : plain);
}
