/** `mortise notice …`: recorded defects of module versions, and the results that each touches. */

import semver from 'semver';
import { printable } from '../model/printable.ts';
import { ancestryFor } from '../register/ancestry.edge.ts';
import type { StandingNotice } from '../register/chain.ts';
import { NO_ANCESTRY, type Touched, touchedBy } from '../register/notice.ts';
import type { Notice } from '../register/record.ts';
import { Register, writerFrom } from '../register/register.edge.ts';
import { sectionText } from '../report/report-text.ts';
import { findRepository } from '../sources/find-repository.edge.ts';
import { type Command, EXIT, type ExitStatus, type Invocation, type Surroundings, UsageError } from './command.ts';
import { openCode } from './open-code.ts';
import { SIGN, signerOf } from './signing.ts';
import { textOptions } from './text-options.ts';

export const command: Command = {
  name: 'notice',
  answers: 'recorded defects, and the results that each touches',
  usage: 'mortise notice add|list|show|lift [NAME]',
  options: {
    sign: SIGN,
    module: { type: 'string', value: 'NAME', says: 'with add: the module that has the defect' },
    versions: { type: 'string', value: 'RANGE', says: 'with add: its versions, a semver range' },
    'brought-in': {
      type: 'string',
      multiple: true,
      value: 'REV',
      says: 'with add: a commit that brought the defect in',
    },
    'mended-at': { type: 'string', multiple: true, value: 'REV', says: 'with add: a commit that mends it' },
    component: { type: 'string', value: 'NAME', says: 'with add: it only touches runs that plug the module in here' },
    state: {
      type: 'string',
      multiple: true,
      value: 'TEXT',
      says: 'with add: it only touches runs that enter "temperature K 1e9.." (quantity, unit, range)',
    },
    gravity: {
      type: 'string',
      value: 'GRAVITY',
      says: 'with add: stop, caution or note, for audits; stop when absent',
    },
    title: { type: 'string', value: 'TEXT', says: 'with add: the defect in a few words' },
    says: { type: 'string', value: 'TEXT', says: 'with add: what is wrong and what it does to results' },
    reason: { type: 'string', value: 'TEXT', says: 'with lift: why the notice no longer holds' },
  },
  help: `
  mortise notice add --module eos-ionising --versions ">=2.0.3 <2.1.2" --title "wrong statistical weight" \\
      --says "pressure 2 % low where hydrogen is half ionised" --state "temperature K 1e4.."
  mortise notice show 2026-04-01-wrong-statistical-weight

"show" lists the results touched, and those of which it can not be known, with why.`,
  async run(invocation, surroundings) {
    const [verb, ...words] = invocation.words;
    const action = ACTIONS[verb ?? ''];
    if (action === undefined) throw new UsageError(`mortise notice needs one of ${Object.keys(ACTIONS).join(', ')}`);
    const opened = await openCode(invocation, surroundings);
    if (opened.place === null)
      throw new UsageError(
        `${opened.findings[0]?.says ?? 'there is no assembly here.'} Notices belong to the register of an assembly`,
      );
    return action(
      words,
      new Register(opened.place.root, signerOf(invocation, surroundings) ?? null),
      opened.place.root,
      invocation,
      surroundings,
    );
  },
};

type Action = (
  words: readonly string[],
  register: Register,
  root: string,
  invocation: Invocation,
  surroundings: Surroundings,
) => Promise<ExitStatus>;

const ACTIONS: Readonly<Record<string, Action>> = { add, list, show, lift };

async function add(
  words: readonly string[],
  register: Register,
  _root: string,
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<ExitStatus> {
  if (words.length > 0) throw new UsageError('mortise notice add takes options only');
  const notice = noticeFrom(invocation);
  const record = register.add({
    kind: 'notice',
    by: writerFrom(surroundings.env),
    title: notice.title,
    content: notice,
  });
  say(invocation, surroundings, record, `recorded ${record.about}\nCommit manifests/register to keep it.\n`);
  return EXIT.ok;
}

function noticeFrom({ options }: Invocation): Notice {
  const one = (name: string) =>
    typeof options[name] === 'string' && options[name] !== '' ? (options[name] as string) : undefined;
  const several = (name: string) => (options[name] as readonly string[] | undefined) ?? [];
  const [module, title, says, versions, component, gravity] = [
    'module',
    'title',
    'says',
    'versions',
    'component',
    'gravity',
  ].map(one);
  if (module === undefined) throw new UsageError('a notice needs --module NAME');
  if (title === undefined || says === undefined) throw new UsageError('a notice needs --title and --says');
  const [broughtIn, mendedAt] = [several('brought-in'), several('mended-at')];
  if (versions === undefined && broughtIn.length === 0)
    throw new UsageError('a notice needs --versions RANGE or --brought-in REV: without one nothing is touched');
  if (versions !== undefined && semver.validRange(versions) === null)
    throw new UsageError(`--versions "${versions}" is no range of versions; one looks like ">=2.0.3 <2.1.2"`);
  if (gravity !== undefined && gravity !== 'stop' && gravity !== 'caution' && gravity !== 'note')
    throw new UsageError('--gravity takes stop, caution or note');
  const states = several('state').map(stateFrom);
  return {
    title,
    module,
    ...(versions === undefined ? {} : { versions }),
    ...(broughtIn.length === 0 ? {} : { broughtIn }),
    ...(mendedAt.length === 0 ? {} : { mendedAt }),
    ...(component === undefined ? {} : { component }),
    ...(states.length === 0 ? {} : { states }),
    says,
    ...(gravity === undefined ? {} : { gravity }),
  };
}

/** `temperature K 1e9..`, `density g/cm3 ..1e-20`, `temperature K 1e4..1e5` */
function stateFrom(text: string): NonNullable<Notice['states']>[number] {
  const match = /^(\S+)\s+(\S+)\s+(\S*?)\.\.(\S*)$/.exec(text.trim());
  const end = (part: string | undefined) => (part === undefined || part === '' ? null : Number(part));
  const [from, to] = [end(match?.[3]), end(match?.[4])];
  if (match === null || Number.isNaN(from) || Number.isNaN(to))
    throw new UsageError(`--state "${text}": write quantity, unit and range, as in "temperature K 1e9.."`);
  return { quantity: match[1]!, unit: match[2]!, from, to };
}

async function list(
  _words: readonly string[],
  register: Register,
  _root: string,
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<ExitStatus> {
  const notices = register.notices();
  const section = {
    title: `${notices.length} ${notices.length === 1 ? 'notice' : 'notices'}`,
    head: ['day', 'notice', 'module', 'versions', ''],
    rows: notices.map((one) => [
      one.written.slice(0, 10),
      one.id,
      one.content.module,
      one.content.versions ?? '',
      one.lifted === null ? '' : 'lifted',
    ]),
  };
  say(invocation, surroundings, notices, `${sectionText(section, textOptions(invocation, surroundings))}\n`);
  return EXIT.ok;
}

async function show(
  words: readonly string[],
  register: Register,
  root: string,
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<ExitStatus> {
  const notice = noticeNamed(register, words);
  const touched = await touchedResults(register, root, notice);
  const rows = touched.map((one) => [one.entry, one.touch, one.because]);
  const { content } = notice;
  const head = `${notice.id}\n${printable(content.title)}: ${printable(content.says)}\n${content.module} ${content.versions ?? ''}${notice.lifted === null ? '' : `\nlifted: ${printable(notice.lifted)}`}\n`;
  const section = {
    title: `${touched.filter((one) => one.touch === 'touched').length} results touched, ${touched.filter((one) => one.touch === 'not known').length} not known`,
    head: ['entry', '', 'why'],
    rows,
  };
  say(
    invocation,
    surroundings,
    { notice, touched },
    `${head}\n${sectionText(section, textOptions(invocation, surroundings))}\n`,
  );
  return EXIT.ok;
}

async function touchedResults(register: Register, root: string, notice: StandingNotice): Promise<Touched[]> {
  const entries = [...register.entries()];
  const place = findRepository(root);
  const commits = [...new Set(entries.flatMap((one) => one.content.code.map((code) => code.commit)))];
  const ancestry = place === null ? NO_ANCESTRY : await ancestryFor(place, [notice.content], commits);
  return touchedBy(notice, entries, ancestry);
}

async function lift(
  words: readonly string[],
  register: Register,
  _root: string,
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<ExitStatus> {
  const notice = noticeNamed(register, words);
  const { reason } = invocation.options;
  if (typeof reason !== 'string' || reason === '') throw new UsageError('mortise notice lift needs --reason TEXT');
  const record = register.add({
    kind: 'lifting',
    about: notice.id,
    replaces: notice.seal,
    by: writerFrom(surroundings.env),
    content: { reason },
  });
  say(invocation, surroundings, record, `lifted ${notice.id}\n`);
  return EXIT.ok;
}

function noticeNamed(register: Register, words: readonly string[]): StandingNotice {
  const [name] = words;
  const meant = name === undefined ? [] : register.notices().filter((one) => one.id.startsWith(name));
  if (meant.length !== 1)
    throw new UsageError(
      name === undefined
        ? 'name a notice; "mortise notice list" shows them'
        : `${meant.length === 0 ? 'no notice begins' : 'several notices begin'} with "${name}"`,
    );
  return meant[0]!;
}

function say(invocation: Invocation, surroundings: Surroundings, value: unknown, plain: string): void {
  surroundings.out(invocation.options.json === true ? `${JSON.stringify(value, null, 2)}\n` : plain);
}
