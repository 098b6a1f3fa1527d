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
import { type RegisterState, registerState, type StandingEntry } from './chain.ts';
import { answers, bare, contentIds, dayOf, type Query, resultText, searchText, standingText } from './find.ts';
import { type ReadRecord, readRecord } from './read-record.ts';
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

const FORM = 1;

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
  mkdirSync(join(file, '..'), { recursive: true });
  for (const attempt of [1, 2]) {
    let database: Database.Database | undefined;
    try {
      database = new SQLite(file, { timeout: 10_000 });
      prepare(database);
      refresh(database, folder, say);
      return sqliteIndex(database);
    } catch (error) {
      database?.close();
      // A damaged index is thrown away once; what fails again is no damage of the index.
      if (attempt === 2) throw error;
      for (const suffix of ['', '-wal', '-shm']) rmSync(file + suffix, { force: true });
    }
  }
  throw new Error('unreachable');
}

/** Every record of the folder, read and put together, without an index. */
export function readRegister(folder: string): RegisterState {
  return registerState(readAll(folder, listRecordFiles(folder)));
}

function readAll(folder: string, files: readonly string[]): ReadRecord[] {
  return files.map((file) => readRecord(file, readRecordBytes(folder, file)));
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
  if (database.pragma('user_version', { simple: true }) === FORM) return;
  database.exec(`
    DROP TABLE IF EXISTS folders; DROP TABLE IF EXISTS records; DROP TABLE IF EXISTS entries; DROP TABLE IF EXISTS modules;
    DROP TABLE IF EXISTS contents; DROP TABLE IF EXISTS cases; DROP TABLE IF EXISTS words; DROP TABLE IF EXISTS tips;
    CREATE TABLE folders (name TEXT PRIMARY KEY, changed TEXT) WITHOUT ROWID;
    CREATE TABLE records (file TEXT PRIMARY KEY, stamp TEXT, about TEXT, seal TEXT, named TEXT) WITHOUT ROWID;
    CREATE INDEX records_about ON records (about);
    CREATE TABLE entries (number INTEGER PRIMARY KEY, id TEXT UNIQUE, day TEXT, result TEXT, standing TEXT, whole TEXT);
    CREATE INDEX entries_day ON entries (day DESC, id DESC);
    CREATE INDEX entries_standing ON entries (standing);
    CREATE TABLE modules (entry INTEGER, module TEXT, component TEXT, version TEXT);
    CREATE INDEX modules_module ON modules (module, version, entry);
    CREATE INDEX modules_component ON modules (component, entry);
    CREATE INDEX modules_entry ON modules (entry);
    CREATE TABLE contents (entry INTEGER, id TEXT);
    CREATE INDEX contents_id ON contents (id, entry);
    CREATE INDEX contents_entry ON contents (entry);
    CREATE TABLE cases (entry INTEGER, name TEXT);
    CREATE INDEX cases_name ON cases (name, entry);
    CREATE INDEX cases_entry ON cases (entry);
    CREATE VIRTUAL TABLE words USING fts5 (text, content='', contentless_delete=1, prefix='2 3 4', tokenize="unicode61 tokenchars '-_.'");
    CREATE TABLE tips (seal TEXT PRIMARY KEY) WITHOUT ROWID;
  `);
  database.pragma(`user_version = ${FORM}`);
}

/** Reads what was added since, forgets what is gone, and leaves the rest alone; nothing to do costs a look at each year's folder. */
function refresh(database: Database.Database, folder: string, say: (done: number, total: number) => void): void {
  const folders = foldersOf(folder);
  const known = new Map(
    (database.prepare('SELECT name, changed FROM folders').all() as { name: string; changed: string }[]).map((one) => [
      one.name,
      one.changed,
    ]),
  );
  if (folders.size === known.size && [...folders].every(([name, changed]) => known.get(name) === changed)) return;
  const files = listRecordFiles(folder);
  const stamps = new Map(
    (database.prepare('SELECT file, stamp FROM records').all() as { file: string; stamp: string }[]).map((one) => [
      one.file,
      one.stamp,
    ]),
  );
  const now = new Map(files.map((file) => [file, stampOf(join(folder, file))]));
  const fresh = files.filter((file) => stamps.get(file) !== now.get(file));
  const gone = [...stamps.keys()].filter((file) => !now.has(file));
  const touched = new Set<string>();
  const read = new Map<string, ReadRecord>();
  const update = database.transaction(() => {
    const about = database.prepare('SELECT about FROM records WHERE file = ?').pluck();
    const forget = database.prepare('DELETE FROM records WHERE file = ?');
    const keep = database.prepare('INSERT OR REPLACE INTO records VALUES (?, ?, ?, ?, ?)');
    for (const file of [...gone, ...fresh]) {
      const before = about.get(file) as string | undefined;
      if (before !== undefined) touched.add(before);
      forget.run(file);
    }
    fresh.forEach((file, index) => {
      const one = readRecord(file, readRecordBytes(folder, file));
      read.set(file, one);
      const { record } = one;
      const named =
        record === undefined ? [] : [...record.follows, ...(record.replaces === undefined ? [] : [record.replaces])];
      keep.run(file, now.get(file), record?.about ?? null, record?.seal ?? null, JSON.stringify(named));
      if (record !== undefined) touched.add(record.about);
      if (index % 500 === 0) say(index, fresh.length);
    });
    rewriteEntries(database, folder, touched, read);
    rewriteTips(database);
    database.exec('DELETE FROM folders');
    const folderRow = database.prepare('INSERT INTO folders VALUES (?, ?)');
    for (const [name, changed] of folders) folderRow.run(name, changed);
  });
  update.immediate();
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
  const { size, mtimeNs } = statSync(file, { bigint: true });
  return `${size} ${mtimeNs}`;
}

function rewriteEntries(
  database: Database.Database,
  folder: string,
  touched: ReadonlySet<string>,
  read: ReadonlyMap<string, ReadRecord>,
): void {
  const filesOf = database.prepare('SELECT file FROM records WHERE about = ? ORDER BY file').pluck();
  const numberOf = database.prepare('SELECT number FROM entries WHERE id = ?').pluck();
  const drop = [
    'entries WHERE number',
    'modules WHERE entry',
    'contents WHERE entry',
    'cases WHERE entry',
    'words WHERE rowid',
  ].map((where) => database.prepare(`DELETE FROM ${where} = ?`));
  const add = {
    entry: database.prepare('INSERT INTO entries (id, day, result, standing, whole) VALUES (?, ?, ?, ?, ?)'),
    module: database.prepare('INSERT INTO modules VALUES (?, ?, ?, ?)'),
    content: database.prepare('INSERT INTO contents VALUES (?, ?)'),
    case: database.prepare('INSERT INTO cases VALUES (?, ?)'),
    words: database.prepare('INSERT INTO words (rowid, text) VALUES (?, ?)'),
  };
  for (const id of touched) {
    const number = numberOf.get(id) as number | undefined;
    if (number !== undefined) for (const one of drop) one.run(number);
    const files = filesOf.all(id) as string[];
    const state = registerState(files.map((file) => read.get(file) ?? readRecord(file, readRecordBytes(folder, file))));
    const entry = state.entries.get(id);
    if (entry === undefined) continue;
    const { lastInsertRowid: row } = add.entry.run(
      id,
      dayOf(entry),
      resultText(entry.content.result),
      standingText(entry),
      wholeOf(entry),
    );
    for (const one of entry.content.modules) add.module.run(row, one.module, one.component, one.version);
    for (const content of new Set(contentIds(entry))) add.content.run(row, bare(content));
    for (const name of new Set((entry.content.cases ?? []).map((one) => one.case))) add.case.run(row, name);
    add.words.run(row, searchText(entry));
  }
}

/** What the exact questions need of an entry, without its records. */
function wholeOf(entry: StandingEntry): string {
  return JSON.stringify({ ...entry, records: [] });
}

function rewriteTips(database: Database.Database): void {
  const all = database.prepare('SELECT seal, named FROM records WHERE seal IS NOT NULL').all() as {
    seal: string;
    named: string;
  }[];
  const named = new Set(all.flatMap((one) => JSON.parse(one.named) as string[]));
  database.exec('DELETE FROM tips');
  const add = database.prepare('INSERT OR IGNORE INTO tips VALUES (?)');
  for (const { seal } of all) if (!named.has(seal)) add.run(seal);
}

function sqliteIndex(database: Database.Database): RegisterIndex {
  const cache = new Map<string, number[]>();
  // Questions that SQL answers only in part are narrowed by it and then answered exactly.
  const matches = (query: Query): number[] => {
    const key = JSON.stringify(query);
    const kept = cache.get(key);
    if (kept !== undefined) return kept;
    const { where, values, exact } = whereOf(query);
    const select = `SELECT number${exact ? '' : ', whole'} FROM entries ${where} ORDER BY day DESC, id DESC`;
    const rows = database.prepare(select).all(...values) as { number: number; whole: string }[];
    const numbers = (exact ? rows : rows.filter((row) => answers(JSON.parse(row.whole) as StandingEntry, query))).map(
      (row) => row.number,
    );
    cache.set(key, numbers);
    return numbers;
  };
  const isEmpty = (query: Query) => Object.values(query).every((value) => value === undefined || value === '');
  const total = database.prepare('SELECT count(*) FROM entries').pluck().get() as number;
  const row = database.prepare('SELECT id, day, result, standing FROM entries WHERE number = ?');
  const page = database.prepare(
    'SELECT id, day, result, standing FROM entries ORDER BY day DESC, id DESC LIMIT ? OFFSET ?',
  );
  return {
    total,
    count: (query) => (isEmpty(query) ? total : matches(query).length),
    find: (query, from, count) =>
      isEmpty(query)
        ? (page.all(count, from) as ListedEntry[])
        : matches(query)
            .slice(from, from + count)
            .map((number) => row.get(number) as ListedEntry),
    filesOf: (id) =>
      database.prepare('SELECT file FROM records WHERE about = ? ORDER BY file').pluck().all(id) as string[],
    tips: () => database.prepare('SELECT seal FROM tips ORDER BY seal').pluck().all() as Seal[],
    close: () => void database.close(),
  };
}

function whereOf(query: Query): { where: string; values: string[]; exact: boolean } {
  const parts: string[] = [];
  const values: string[] = [];
  let exact = true;
  const given = (value: string | undefined): value is string => value !== undefined && value !== '';
  if (given(query.text)) {
    parts.push('number IN (SELECT rowid FROM words WHERE words MATCH ?)');
    values.push(ftsQuery(query.text));
  }
  if (given(query.module) || given(query.component) || given(query.versions)) {
    const inside = [
      ...(given(query.module) ? ['module = ?'] : []),
      ...(given(query.component) ? ['component = ?'] : []),
    ];
    if (inside.length > 0) {
      parts.push(`number IN (SELECT entry FROM modules WHERE ${inside.join(' AND ')})`);
      values.push(...[query.module, query.component].filter(given));
    }
    exact &&= !given(query.versions);
  }
  if (given(query.content)) {
    parts.push('number IN (SELECT entry FROM contents WHERE id >= ? AND id < ?)');
    values.push(bare(query.content), `${bare(query.content)}g`);
    exact &&= bare(query.content).length >= 8;
  }
  if (given(query.case)) {
    parts.push('number IN (SELECT entry FROM cases WHERE name = ?)');
    values.push(query.case);
  }
  if (given(query.from)) parts.push('day >= ?') && values.push(query.from);
  if (given(query.to)) parts.push('day <= ?') && values.push(query.to);
  if (given(query.standing)) parts.push('standing = ?') && values.push(query.standing);
  if (given(query.person) || given(query.result) || given(query.machine)) exact = false;
  return { where: parts.length === 0 ? '' : `WHERE ${parts.join(' AND ')}`, values, exact };
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
