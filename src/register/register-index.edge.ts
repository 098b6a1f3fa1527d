/**
 * The index beside the register: SQLite with full text, kept in the cache folder. Derived and never the truth: it is made again
 * whenever it is missing, damaged, of another version or behind the files. Without SQLite on the machine the register answers
 * from memory, slower and the same.
 */
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, rmSync, statSync } from 'node:fs';
import { createRequire } from 'node:module';
import { join, resolve } from 'node:path';
import type Database from 'better-sqlite3';
import { cacheFolder } from '../sources/cache-folder.edge.ts';
import { headOf, type RegisterState, registerState, type StandingEntry } from './chain.ts';
import {
  answers,
  bare,
  contentIds,
  dayOf,
  holdsWords,
  inRange,
  isPerson,
  type Query,
  resultText,
  searchText,
  standingText,
} from './find.ts';
import { readDoi } from './identifiers.ts';
import { readRecord } from './read-record.ts';
import type { Seal } from './record.ts';
import { listRecordFiles, readRecordBytes } from './register-files.edge.ts';

/** A line of a list. */
export interface ListedEntry {
  readonly id: string;
  readonly day: string;
  readonly result: string;
  readonly standing: string;
}

export interface RegisterIndex {
  readonly total: number;
  count(query: Query): number;
  /** Newest first. */
  find(query: Query, from: number, count: number): ListedEntry[];
  /** The files of the records about an entry. */
  filesOf(id: string): string[];
  /** Seals that the next record has to follow. */
  tips(): Seal[];
  close(): void;
}

const FORM = 3;

/** Opens the index of a register's folder, bringing it up to date first. `say` is told of progress when that takes a while. */
export function openRegisterIndex(
  folder: string,
  say: (done: number, total: number) => void = () => {},
): RegisterIndex {
  const SQLite = loadSqlite();
  if (SQLite === null) return memoryIndex(readRegister(folder));
  const file = join(
    cacheFolder(),
    'register',
    `${createHash('sha256').update(resolve(folder)).digest('hex').slice(0, 32)}.sqlite`,
  );
  for (const attempt of [1, 2]) {
    let database: Database.Database | undefined;
    try {
      mkdirSync(join(file, '..'), { recursive: true });
      database = new SQLite(file, { timeout: 3_000 });
      prepare(database);
      refresh(database, folder, say);
      return sqliteIndex(database);
    } catch (error) {
      database?.close();
      // Only what is damaged is thrown away, and once: others may have it open.
      if (attempt === 2 || !isDamaged(error)) break;
      for (const suffix of ['', '-wal', '-shm']) rmSync(file + suffix, { force: true });
    }
  }
  // A full or read-only disk, or too many at once: the files themselves are asked, which takes longer.
  return memoryIndex(readRegister(folder));
}

function isDamaged(error: unknown): boolean {
  const { code } = error as { code?: string };
  return code === 'SQLITE_CORRUPT' || code === 'SQLITE_NOTADB' || code === 'SQLITE_ERROR' || code === undefined;
}

/** Every record of the folder, read and put together, without an index. */
export function readRegister(folder: string): RegisterState {
  return registerState(listRecordFiles(folder).map((file) => readRecord(file, readRecordBytes(folder, file))));
}

function loadSqlite(): typeof Database | null {
  try {
    const SQLite = createRequire(import.meta.url)('better-sqlite3') as typeof Database;
    new SQLite(':memory:').close();
    return SQLite;
  } catch {
    return null;
  }
}

function prepare(database: Database.Database): void {
  database.pragma('journal_mode = WAL');
  database.pragma('synchronous = OFF');
  database.pragma('cache_size = -65536');
  if (database.pragma('user_version', { simple: true }) === FORM) return;
  database.exec(`
    DROP TABLE IF EXISTS folders; DROP TABLE IF EXISTS records; DROP TABLE IF EXISTS entries; DROP TABLE IF EXISTS modules;
    DROP TABLE IF EXISTS contents; DROP TABLE IF EXISTS cases; DROP TABLE IF EXISTS labels; DROP TABLE IF EXISTS wholes; DROP TABLE IF EXISTS words; DROP TABLE IF EXISTS tips;
    CREATE TABLE folders (name TEXT PRIMARY KEY, changed TEXT) WITHOUT ROWID;
    CREATE TABLE records (file TEXT PRIMARY KEY, stamp TEXT, about TEXT, seal TEXT, names TEXT) WITHOUT ROWID;
    CREATE INDEX records_about ON records (about);
    CREATE TABLE entries (number INTEGER PRIMARY KEY, id TEXT UNIQUE, day TEXT, result TEXT, standing TEXT);
    CREATE INDEX entries_day ON entries (day DESC, id DESC);
    CREATE INDEX entries_standing ON entries (standing);
    CREATE TABLE wholes (number INTEGER PRIMARY KEY, whole TEXT);
    CREATE TABLE modules (module TEXT, version TEXT, component TEXT, entry INTEGER, PRIMARY KEY (module, version, component, entry)) WITHOUT ROWID;
    CREATE TABLE contents (id INTEGER, entry INTEGER, PRIMARY KEY (id, entry)) WITHOUT ROWID;
    CREATE TABLE labels (sort TEXT, value TEXT, entry INTEGER, PRIMARY KEY (sort, value, entry)) WITHOUT ROWID;
    CREATE VIRTUAL TABLE words USING fts5 (text, content='', contentless_delete=1, detail=none, tokenize="unicode61 tokenchars '-_.'");
    CREATE TABLE tips (seal TEXT PRIMARY KEY) WITHOUT ROWID;
  `);
  database.pragma(`user_version = ${FORM}`);
}

/** Reads what was added since, forgets what is gone, and leaves the rest alone; nothing to do costs a look at each year's folder. */
function refresh(database: Database.Database, folder: string, say: (done: number, total: number) => void): void {
  const folders = foldersOf(folder);
  const known = database.prepare('SELECT name, changed FROM folders').all() as { name: string; changed: string }[];
  if (folders.size === known.length && known.every((one) => folders.get(one.name) === one.changed)) return;
  const files = listRecordFiles(folder);
  const now = new Map(files.map((file) => [file, stampOf(join(folder, file))]));
  const kept = database.prepare('SELECT file, stamp, about FROM records').all() as {
    file: string;
    stamp: string;
    about: string;
  }[];
  const stamps = new Map(kept.map((one) => [one.file, one.stamp]));
  const gone = kept.filter((one) => now.get(one.file) !== one.stamp);
  const touched = new Map<string, string[]>();
  for (const file of files) {
    if (stamps.get(file) === now.get(file)) continue;
    const about = aboutOf(file);
    touched.set(about, [...(touched.get(about) ?? []), file]);
  }
  for (const { about } of gone) if (!touched.has(about)) touched.set(about, []);
  const update = database.transaction(() => {
    const writer = new EntryWriter(database, folder);
    for (const { file } of gone) writer.forget(file);
    let done = 0;
    for (const [about, fresh] of touched) {
      writer.rewrite(about, fresh, now);
      if (++done % 500 === 0) say(done, touched.size);
    }
    rewriteTips(database);
    database.exec('DELETE FROM folders');
    const folderRow = database.prepare('INSERT INTO folders VALUES (?, ?)');
    for (const [name, changed] of folders) folderRow.run(name, changed);
  });
  update.immediate();
}

/** What a record is about stands in its file's name; a misnamed file is then only filed under another heading. */
function aboutOf(file: string): string {
  return file.slice(file.lastIndexOf('/') + 1).replace(/\.[a-z]+\.[0-9a-f]{8}\.yaml$/, '');
}

function foldersOf(folder: string): Map<string, string> {
  if (!existsSync(folder)) return new Map();
  const names = [
    '',
    ...readdirSync(folder, { withFileTypes: true })
      .filter((one) => one.isDirectory())
      .map((one) => one.name),
  ];
  return new Map(names.map((name) => [name, String(statSync(join(folder, name), { bigint: true }).mtimeNs)]));
}

function stampOf(file: string): string {
  const { size, mtimeMs } = statSync(file);
  return `${size} ${mtimeMs}`;
}

/** Rows of one entry after another: nothing of an entry stays in memory once it is written. */
class EntryWriter {
  private readonly folder: string;
  private readonly statements: Readonly<Record<string, Database.Statement>>;

  constructor(database: Database.Database, folder: string) {
    this.folder = folder;
    const sql = {
      forget: 'DELETE FROM records WHERE file = ?',
      record: 'INSERT OR REPLACE INTO records VALUES (?, ?, ?, ?, ?)',
      files: 'SELECT file FROM records WHERE about = ? ORDER BY file',
      before: 'SELECT number, whole FROM entries JOIN wholes USING (number) WHERE id = ?',
      entry: 'INSERT INTO entries (id, day, result, standing) VALUES (?, ?, ?, ?)',
      whole: 'INSERT INTO wholes VALUES (?, ?)',
      module: 'INSERT OR IGNORE INTO modules VALUES (?, ?, ?, ?)',
      content: 'INSERT OR IGNORE INTO contents VALUES (?, ?)',
      label: 'INSERT OR IGNORE INTO labels VALUES (?, ?, ?)',
      words: 'INSERT INTO words (rowid, text) VALUES (?, ?)',
      dropEntry: 'DELETE FROM entries WHERE number = ?',
      dropWhole: 'DELETE FROM wholes WHERE number = ?',
      dropModule: 'DELETE FROM modules WHERE module = ? AND version = ? AND component = ? AND entry = ?',
      dropContent: 'DELETE FROM contents WHERE id = ? AND entry = ?',
      dropLabel: 'DELETE FROM labels WHERE sort = ? AND value = ? AND entry = ?',
      dropWords: 'DELETE FROM words WHERE rowid = ?',
    };
    this.statements = Object.fromEntries(Object.entries(sql).map(([name, text]) => [name, database.prepare(text)]));
  }

  forget(file: string): void {
    this.run('forget', file);
  }

  /** Reads all records about an entry and writes its rows anew. */
  rewrite(about: string, fresh: readonly string[], stamps: ReadonlyMap<string, string>): void {
    const before = this.statements.before!.get(about) as { number: number; whole: string } | undefined;
    if (before !== undefined) this.rows('drop', before.number, JSON.parse(before.whole) as StandingEntry);
    const known = (this.statements.files!.all(about) as { file: string }[]).map((one) => one.file);
    const files = [...new Set([...known, ...fresh])].sort();
    const read = files.map((file) => readRecord(file, readRecordBytes(this.folder, file)));
    for (const one of read) {
      const head = headOf(one);
      this.run('record', one.file, stamps.get(one.file), about, head?.seal ?? null, JSON.stringify(head?.names ?? []));
    }
    const [entry] = registerState(read).entries.values();
    if (entry === undefined) return;
    const { lastInsertRowid } = this.run(
      'entry',
      entry.id,
      dayOf(entry),
      resultText(entry.content.result),
      standingText(entry),
    );
    this.rows('add', Number(lastInsertRowid), entry);
  }

  private rows(how: 'add' | 'drop', number: number, entry: StandingEntry): void {
    const { content } = entry;
    const name = (one: string) => (how === 'add' ? one : `drop${one.charAt(0).toUpperCase()}${one.slice(1)}`);
    for (const one of content.modules) this.run(name('module'), one.module, one.version, one.component, number);
    for (const id of contentIds(entry)) this.run(name('content'), firstDigits(id), number);
    for (const [sort, value] of labelsOf(entry)) this.run(name('label'), sort, value, number);
    if (how === 'drop') {
      for (const one of ['dropEntry', 'dropWhole', 'dropWords']) this.run(one, number);
      return;
    }
    this.run('whole', number, JSON.stringify({ ...entry, records: [] }));
    this.run('words', number, searchText(entry));
  }

  private run(statement: string, ...values: unknown[]): Database.RunResult {
    return this.statements[statement]!.run(...values);
  }
}

/** What an entry is found by besides modules, contents and words: few distinct values each, looked through one by one. */
function labelsOf(entry: StandingEntry): [string, string][] {
  const { cases, people, environment } = entry.content;
  return [
    ...(cases ?? []).map((one): [string, string] => ['case', one.case]),
    ...people.map((one): [string, string] => ['person', JSON.stringify([one.name, one.orcid ?? null])]),
    ...(environment === undefined ? [] : [['machine', Object.values(environment).join(' ')] as [string, string]]),
  ];
}

function rewriteTips(database: Database.Database): void {
  const all = database.prepare('SELECT seal, names FROM records WHERE seal IS NOT NULL').raw().all() as [
    string,
    string,
  ][];
  const named = new Set(all.flatMap(([, names]) => JSON.parse(names) as string[]));
  database.exec('DELETE FROM tips');
  const add = database.prepare('INSERT OR IGNORE INTO tips VALUES (?)');
  for (const [seal] of all) if (!named.has(seal)) add.run(seal);
}

function sqliteIndex(database: Database.Database): RegisterIndex {
  const total = database.prepare('SELECT count(*) FROM entries').pluck().get() as number;
  const page = database.prepare(
    'SELECT id, day, result, standing FROM entries ORDER BY day DESC, id DESC LIMIT ? OFFSET ?',
  );
  const row = database.prepare('SELECT id, day, result, standing FROM entries WHERE number = ?');
  const finder = new Finder(database);
  const isEmpty = (query: Query) => Object.values(query).every((value) => value === undefined || value === '');
  return {
    total,
    count: (query) => (isEmpty(query) ? total : finder.matches(query).length),
    find: (query, from, count) =>
      isEmpty(query)
        ? (page.all(count, from) as ListedEntry[])
        : Array.from(finder.matches(query).subarray(from, from + count), (number) => row.get(number) as ListedEntry),
    filesOf: (id) =>
      database.prepare('SELECT file FROM records WHERE about = ? ORDER BY file').pluck().all(id) as string[],
    tips: () => database.prepare('SELECT seal FROM tips ORDER BY seal').pluck().all() as Seal[],
    close: () => void database.close(),
  };
}

/** Answers questions part by part, each a set of entry numbers, and keeps those that are in every set, newest first. */
class Finder {
  private readonly database: Database.Database;
  private order: Int32Array | null = null;
  private readonly answered = new Map<string, Int32Array>();

  constructor(database: Database.Database) {
    this.database = database;
  }

  matches(query: Query): Int32Array {
    const key = JSON.stringify(query);
    const kept = this.answered.get(key);
    if (kept !== undefined) return kept;
    this.order ??= Int32Array.from(this.numbers('SELECT number FROM entries ORDER BY day DESC, id DESC'));
    const sets = this.sets(query);
    const marks = new Uint8Array(Math.max(0, ...this.order) + 1);
    sets.forEach((set, index) => {
      for (const number of set) if (marks[number] === index) marks[number] = index + 1;
    });
    const found = this.order.filter((number) => marks[number] === sets.length);
    if (this.answered.size > 64) this.answered.clear();
    this.answered.set(key, found);
    return found;
  }

  private sets(query: Query): number[][] {
    const sets: number[][] = [];
    const given = (value: string | undefined): value is string => value !== undefined && value !== '';
    if (given(query.text)) sets.push(this.numbers('SELECT rowid FROM words WHERE words MATCH ?', ftsQuery(query.text)));
    if (given(query.module) || given(query.versions) || given(query.component)) sets.push(this.byModule(query));
    if (given(query.content)) sets.push(this.byContent(query.content));
    if (given(query.case))
      sets.push(this.numbers("SELECT entry FROM labels WHERE sort = 'case' AND value = ?", query.case));
    if (given(query.person)) {
      const asked = query.person;
      sets.push(this.byLabel('person', (value) => isPerson(JSON.parse(value) as [string, string | null], asked)));
    }
    if (given(query.machine)) {
      const asked = query.machine;
      sets.push(this.byLabel('machine', (value) => holdsWords(value, asked)));
    }
    if (given(query.result)) sets.push(this.byResult(query.result));
    if (given(query.from)) sets.push(this.numbers('SELECT number FROM entries WHERE day >= ?', query.from));
    if (given(query.to)) sets.push(this.numbers('SELECT number FROM entries WHERE day <= ?', query.to));
    if (given(query.standing)) sets.push(this.numbers('SELECT number FROM entries WHERE standing = ?', query.standing));
    return sets;
  }

  /** Distinct versions are few: each is held against the range once, whatever the number of entries. */
  private byModule({ module, component, versions }: Query): number[] {
    const distinct = this.database.prepare('SELECT DISTINCT module, version, component FROM modules').raw().all() as [
      string,
      string,
      string,
    ][];
    const wanted = distinct.filter(
      ([name, version, role]) =>
        (module === undefined || name === module) &&
        (component === undefined || role === component) &&
        (versions === undefined || inRange(version, versions)),
    );
    return wanted.flatMap((one) =>
      this.numbers('SELECT entry FROM modules WHERE module = ? AND version = ? AND component = ?', ...one),
    );
  }

  /** By the first digits, then exactly: the table of ids stays small, and few entries share thirteen digits. */
  private byContent(asked: string): number[] {
    const digits = bare(asked);
    if (digits.length < 8 || !/^[0-9a-f]+$/.test(digits)) return [];
    const low = firstDigits(digits);
    const high = low + 16 ** Math.max(0, DIGITS - digits.length);
    const whole = this.database.prepare('SELECT whole FROM wholes WHERE number = ?').pluck();
    const candidates = this.database
      .prepare('SELECT DISTINCT entry FROM contents WHERE id >= ? AND id < ?')
      .pluck()
      .all(low, high) as number[];
    if (digits.length <= DIGITS) return candidates;
    return candidates.filter((number) =>
      contentIds(JSON.parse(whole.get(number) as string) as StandingEntry).some((id) => bare(id).startsWith(digits)),
    );
  }

  private byLabel(sort: string, isWanted: (value: string) => boolean): number[] {
    const values = this.database
      .prepare('SELECT DISTINCT value FROM labels WHERE sort = ?')
      .pluck()
      .all(sort) as string[];
    return values
      .filter(isWanted)
      .flatMap((value) => this.numbers('SELECT entry FROM labels WHERE sort = ? AND value = ?', sort, value));
  }

  /** By the text of the result, which holds every identifier of it; other spellings of a DOI are brought to its bare name first. */
  private byResult(asked: string): number[] {
    const doi = readDoi(asked);
    const text = doi === null ? asked : `${doi.prefix}/${doi.suffix}`;
    const words = text.toLowerCase().split(/\s+/);
    const candidates = this.database
      .prepare(
        `SELECT number, result FROM entries WHERE ${words.map(() => 'instr(lower(result), ?) > 0').join(' AND ')}`,
      )
      .raw();
    const rows = candidates.all(...words) as [number, string][];
    // A DOI is whole or it is another one: 10.1000/1 is not 10.1000/18.
    const whole = new RegExp(`doi (?:\\S*doi\\.org/|doi:)?${literally(text)}(?:,|$)`, 'i');
    return (doi === null ? rows : rows.filter(([, result]) => whole.test(result))).map(([number]) => number);
  }

  private numbers(sql: string, ...values: string[]): number[] {
    return this.database
      .prepare(sql)
      .pluck()
      .all(...values) as number[];
  }
}

const DIGITS = 13;

/** The first thirteen hexadecimal digits of an id as a number: 52 bits, exact. */
function firstDigits(id: string): number {
  return Number.parseInt(bare(id).slice(0, DIGITS).padEnd(DIGITS, '0'), 16) || 0;
}

function literally(text: string): string {
  return text.replace(/[.*+?^${}()|[\]\\]/g, '\\$&');
}

/** Every word typed, as the beginning of a word in the text; quotes keep the query language out of it. */
function ftsQuery(text: string): string {
  return text
    .split(/\s+/)
    .filter((word) => word !== '')
    .map((word) => `"${word.replaceAll('"', '""')}"*`)
    .join(' ');
}

function memoryIndex(state: RegisterState): RegisterIndex {
  const all = [...state.entries.values()].sort((a, b) =>
    dayOf(a) < dayOf(b) ? 1 : dayOf(a) > dayOf(b) ? -1 : a.id < b.id ? 1 : -1,
  );
  const matches = (query: Query) => all.filter((entry) => answers(entry, query));
  return {
    total: all.length,
    count: (query) => matches(query).length,
    find: (query, from, count) =>
      matches(query)
        .slice(from, from + count)
        .map((entry) => ({
          id: entry.id,
          day: dayOf(entry),
          result: resultText(entry.content.result),
          standing: standingText(entry),
        })),
    filesOf: (id) => state.entries.get(id)?.records.map((one) => one.file) ?? [],
    tips: () => [...state.tips],
    close: () => {},
  };
}
