/**
 * YAML 1.2 text comes in; a plain tree with the place of every key and value goes out, or what is wrong, all at once.
 * Nothing is ever built from a tag: a manifest is data, never code. Aliases share a node and are never copied, and what a
 * document would hold when written out is counted before anyone walks it.
 */
import { Composer, type Document, isAlias, isMap, isScalar, isSeq, Lexer, type ParsedNode, Parser } from 'yaml';
import type { ManifestText, Span } from './manifest-text.ts';
import { type Problem, quoted } from './problem.ts';

export type TreeNode = MapNode | ListNode | ScalarNode;

export interface MapNode {
  readonly is: 'map';
  readonly span: Span;
  readonly entries: ReadonlyMap<string, { readonly key: Span; readonly node: TreeNode }>;
}
export interface ListNode {
  readonly is: 'list';
  readonly span: Span;
  readonly items: readonly TreeNode[];
}
export interface ScalarNode {
  readonly is: 'scalar';
  readonly span: Span;
  readonly value: string | number | boolean | null;
  /** As written, for plain scalars: `1.10` is the number 1.1 and the text "1.10". */
  readonly written: string;
  readonly plain: boolean;
}

export interface YamlTree {
  readonly root: TreeNode | null;
  readonly problems: readonly Problem[];
}

/** Deeper nesting than any manifest has; kept far below what would overflow the stack of the parser. */
const DEEPEST = 60;
/** Words and marks of YAML in one manifest; more would keep the parser busy for seconds. */
const MOST_TOKENS = 300_000;
/** Nodes of a manifest with every alias written out. */
const MOST_NODES = 100_000;

export function readYamlTree(source: ManifestText): YamlTree {
  const composed = compose(source.text);
  if ('problem' in composed) return { root: null, problems: [composed.problem] };
  const { document } = composed;
  const problems: Problem[] = [];
  for (const error of document.errors) {
    // After a first mistake the parser stumbles over everything that follows it.
    if (error.code === 'UNEXPECTED_TOKEN' && problems.length > 0) continue;
    const problem = syntaxProblem(error.code, error.message, spanOf(error.pos), source);
    // Brackets that stay open are told by each of them at one and the same place.
    if (problems.at(-1)?.says !== problem.says) problems.push(problem);
  }
  if (document.directives?.yaml.explicit === true && document.directives.yaml.version === '1.1') {
    const at = source.text.indexOf('%YAML');
    problems.push({
      kind: 'manifest-syntax',
      span: { start: Math.max(0, at), end: Math.max(0, at) + 9 },
      says: 'Manifests are YAML 1.2; 1.1 reads "no" as false and 1_000 as a number.',
      next: 'remove the %YAML line, or write "%YAML 1.2".',
    });
  }
  // A tree of text that does not parse would only repeat the same mistake in other words.
  if (problems.length > 0 || document.contents === null) return { root: null, problems };
  const builder = new TreeBuilder(problems);
  const root = builder.build(document.contents);
  if (builder.sizeOf(root) > MOST_NODES) {
    return {
      root: null,
      problems: [
        {
          kind: 'manifest-unreadable',
          span: { start: root.span.start, end: root.span.start + 1 },
          says: `With its aliases written out this manifest would hold ${builder.sizeOf(root).toLocaleString('en')} values; at most ${MOST_NODES.toLocaleString('en')} are read.`,
          next: 'write the repeated parts out, without anchors and aliases.',
        },
      ],
    };
  }
  return { root: problems.length > 0 ? null : root, problems };
}

type Composed = { readonly document: Document.Parsed } | { readonly problem: Problem };

/** Runs lexer, parser and composer one after another, so that nesting can be seen before anything recurses over it. */
function compose(text: string): Composed {
  const parser = new Parser();
  const tokens = [];
  let lexemes = 0;
  for (const lexeme of new Lexer().lex(text)) {
    if (++lexemes > MOST_TOKENS) {
      return {
        problem: {
          kind: 'manifest-unreadable',
          span: { start: parser.offset, end: parser.offset + 1 },
          says: `The manifest holds more than ${MOST_TOKENS.toLocaleString('en')} words and marks; what lies beyond this place was not read.`,
          next: 'keep data in a table of its own, and name that table under "tables".',
        },
      };
    }
    for (const token of parser.next(lexeme)) tokens.push(token);
    if (parser.stack.length > DEEPEST) {
      return {
        problem: {
          kind: 'manifest-unreadable',
          span: { start: parser.offset, end: parser.offset + 1 },
          says: `Lists and maps are nested more than ${DEEPEST} deep here; no manifest is.`,
          next: 'look for brackets that are never closed, or for a file that is no manifest.',
        },
      };
    }
  }
  for (const token of parser.end()) tokens.push(token);
  // Key uniqueness is checked in TreeBuilder: the parser's own check compares every pair of keys.
  const composer = new Composer({
    version: '1.2',
    schema: 'core',
    merge: false,
    uniqueKeys: false,
    logLevel: 'silent',
  });
  const documents = [...composer.compose(tokens, true, text.length)];
  const [document, second] = documents;
  if (second !== undefined) {
    const at = second.range?.[0] ?? 0;
    return {
      problem: {
        kind: 'manifest-syntax',
        span: { start: at, end: at + 1 },
        says: 'A second YAML document begins here.',
        next: 'give every manifest a file of its own, and remove the "---" line.',
      },
    };
  }
  return { document: document as Document.Parsed };
}

class TreeBuilder {
  private readonly anchors = new Map<string, TreeNode | 'open'>();
  private readonly sizes = new Map<TreeNode, number>();
  private readonly problems: Problem[];

  constructor(problems: Problem[]) {
    this.problems = problems;
  }

  build(node: ParsedNode | null): TreeNode {
    if (node === null) return nothing({ start: 0, end: 0 });
    const span = contentSpan(node);
    if (isAlias(node)) {
      const known = this.anchors.get(node.source);
      if (known !== undefined && known !== 'open') return known;
      this.problems.push({
        kind: 'manifest-syntax',
        span,
        says:
          known === 'open'
            ? `The alias *${node.source} stands inside the part that it names, which would never end.`
            : `No part of this manifest is marked &${node.source} before this alias.`,
        next: 'write the part out instead of the alias.',
      });
      return nothing(span);
    }
    if (node.tag !== undefined) {
      this.problems.push({
        kind: 'manifest-unreadable',
        span,
        says: `The value is marked with the tag ${quoted(node.tag)}; a manifest is data, and tags are never followed.`,
        next: 'remove the tag and write the value itself.',
      });
    }
    if (node.anchor !== undefined) this.anchors.set(node.anchor, 'open');
    const built = this.inside(node, span);
    if (node.anchor !== undefined) this.anchors.set(node.anchor, built);
    return built;
  }

  private inside(node: ParsedNode, span: Span): TreeNode {
    if (isMap(node)) {
      const entries = new Map<string, { key: Span; node: TreeNode }>();
      for (const pair of node.items) {
        const key = this.key(pair.key as ParsedNode | null, span);
        const built = pair.value === null ? nothing(key.span) : this.build(pair.value as ParsedNode);
        // A value that is not there is pointed at by its key.
        const value = built.is === 'scalar' && built.value === null && built.written === '' ? nothing(key.span) : built;
        if (key.name === null) continue;
        const before = entries.get(key.name);
        if (before === undefined) entries.set(key.name, { key: key.span, node: value });
        else {
          this.problems.push({
            kind: 'manifest-syntax',
            span: key.span,
            says: `The key ${quoted(key.name)} stands here a second time; only one of the two values would count.`,
            next: 'remove one of them, or merge their values.',
          });
        }
      }
      return { is: 'map', span, entries };
    }
    if (isSeq(node)) {
      return { is: 'list', span, items: node.items.map((item) => this.build(item as ParsedNode)) };
    }
    if (isScalar(node)) {
      const value = node.value;
      const simple =
        typeof value === 'string' || typeof value === 'number' || typeof value === 'boolean' || value === null;
      return {
        is: 'scalar',
        span,
        value: simple ? value : String(value),
        written: node.source ?? String(value ?? ''),
        plain: node.type === 'PLAIN' || node.type === undefined,
      };
    }
    return nothing(span);
  }

  private key(key: ParsedNode | null, parent: Span): { name: string | null; span: Span } {
    const span = key === null ? { start: parent.start, end: parent.start + 1 } : contentSpan(key);
    if (key !== null && isScalar(key) && key.value !== null && key.tag === undefined) {
      return { name: key.source ?? String(key.value), span };
    }
    this.problems.push({
      kind: 'manifest-syntax',
      span,
      says: 'A key must be a plain word.',
      next: 'write the key as a word, followed by a colon.',
    });
    return { name: null, span };
  }

  /** Nodes with every alias written out; computed once a node, so a bomb is measured without being set off. */
  sizeOf(node: TreeNode): number {
    const known = this.sizes.get(node);
    if (known !== undefined) return known;
    let size = 1;
    if (node.is === 'list') for (const item of node.items) size += this.sizeOf(item);
    if (node.is === 'map') for (const entry of node.entries.values()) size += 1 + this.sizeOf(entry.node);
    this.sizes.set(node, size);
    return size;
  }
}

function nothing(span: Span): ScalarNode {
  return { is: 'scalar', span, value: null, written: '', plain: true };
}

/** From the first character of the value to its last, without comments and white space behind it. */
function contentSpan(node: ParsedNode): Span {
  const [start, end] = node.range;
  return { start, end: Math.max(end, start + 1) };
}

function spanOf([start, end]: readonly [number, number]): Span {
  return { start, end: Math.max(end, start + 1) };
}

/** What the parser says, with what to write instead for the slips that people make. */
function syntaxProblem(code: string, message: string, span: Span, source: ManifestText): Problem {
  const [says, next] = SLIPS[code]?.(source.text.slice(span.start, span.end)) ?? [
    `${message.replace(/\.?$/, '')}.`,
    'write it as YAML 1.2.',
  ];
  return { kind: code === 'RESOURCE_EXHAUSTION' ? 'manifest-unreadable' : 'manifest-syntax', span, says, next };
}

const SLIPS: Readonly<Record<string, (text: string) => readonly [string, string]>> = {
  TAB_AS_INDENT: () => ['A tab stands where YAML counts spaces.', 'indent with spaces.'],
  BAD_INDENT: () => [
    'This does not line up with what it belongs to, or a bracket before it is still open.',
    'start the keys of one map in the same column, and close every [ and {.',
  ],
  BLOCK_AS_IMPLICIT_KEY: () => [
    'A value on one line holds a second "key: value".',
    'put quotes around the value, or write the inner map as {key: value}.',
  ],
  MISSING_CHAR: () => [
    'Something that was opened is not closed, or a colon or comma is missing.',
    'close the quote or bracket, or add what is missing.',
  ],
  BAD_DQ_ESCAPE: (text) => [
    `${quoted(text)} is no escape inside double quotes.`,
    'use single quotes, or write \\\\ for a backslash.',
  ],
  BAD_SCALAR_START: (text) => [
    `A plain value cannot begin with ${quoted(text.slice(0, 1))}.`,
    'put quotes around the value.',
  ],
  MULTILINE_IMPLICIT_KEY: () => [
    'A key and its value must begin on one line; a colon or an indent is missing.',
    'write "key: value", each on its own line.',
  ],
  UNEXPECTED_TOKEN: (text) => [
    `${quoted(text)} does not belong here.`,
    'put quotes around the value, or write what is missing before it.',
  ],
  RESOURCE_EXHAUSTION: () => [
    'The nesting here is deeper than any manifest needs.',
    'look for brackets that are never closed.',
  ],
};
