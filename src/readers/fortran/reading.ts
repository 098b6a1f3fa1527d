/** What a reading of one unit has gathered so far, and the scope that the next statement stands in. */

import type { ReadStatement } from '../../model/expression.ts';
import type {
  CallSite,
  Claim,
  CommonBlock,
  External,
  Generic,
  Include,
  Incomplete,
  LiteralUse,
  ModuleVariable,
  NamedConstant,
  Procedure,
  StorageStatement,
  TypeDefinition,
  Use,
} from '../../model/interface.ts';
import type { ReadOptions } from '../read-options.ts';
import type { Names } from './names.ts';
import { Scope } from './scope.ts';
import type { SourceText } from './source-text.ts';

/** The lists of a file interface, still open. */
export class Found {
  readonly procedures: Procedure[] = [];
  readonly commons: CommonBlock[] = [];
  readonly types: TypeDefinition[] = [];
  readonly variables: ModuleVariable[] = [];
  readonly constants: NamedConstant[] = [];
  readonly literals: LiteralUse[] = [];
  readonly uses: Use[] = [];
  readonly includes: Include[] = [];
  readonly generics: Generic[] = [];
  readonly calls: CallSite[] = [];
  readonly claims: Claim[] = [];
  readonly storage: StorageStatement[] = [];
  readonly externals: External[] = [];
  readonly statements: ReadStatement[] = [];
  readonly incomplete: Incomplete[] = [];
}

export class Reading {
  readonly path: string;
  readonly text: SourceText;
  readonly names: Names;
  readonly options: ReadOptions;
  readonly found: Found;
  readonly file: Scope;
  scope: Scope;
  /** Above zero while an included file is read: it types and dimensions, and is told by its own reading. */
  inside = 0;
  /** Comments on lines of their own: begin, end, line of each. */
  readonly comments: number[] = [];
  /** Names of the last declaration, for comments on the lines after it. */
  lastNames: readonly string[] = [];
  lastLine = 0;

  constructor(path: string, text: SourceText, names: Names, options: ReadOptions, found: Found, firstLine: number) {
    this.path = path;
    this.text = text;
    this.names = names;
    this.options = options;
    this.found = found;
    this.file = new Scope('file', '', null, firstLine, 1, null);
    this.scope = this.file;
  }

  /** The procedure that literals and calls stand in. */
  procedurePath(): string | null {
    const { kind, own } = this.scope;
    return kind === 'file' || kind === 'module' ? null : own;
  }
}
