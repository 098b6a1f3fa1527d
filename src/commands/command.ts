/** What every command is, and what it is given. main.ts finds the command, parses its options by this table and runs it. */

export const EXIT = { ok: 0, stop: 1, usage: 2, incomplete: 3, interrupted: 130 } as const;
export type ExitStatus = (typeof EXIT)[keyof typeof EXIT];

export interface OptionSpec {
  readonly type: 'boolean' | 'string';
  /** May be given several times; the values arrive as a list. */
  readonly multiple?: boolean;
  /** Name of the value in help: `REV`, `FILE`. */
  readonly value?: string;
  readonly says: string;
}

export interface Invocation {
  readonly words: readonly string[];
  readonly options: Readonly<Record<string, string | boolean | readonly string[] | undefined>>;
}

/** The machine as a command sees it; tests hand in their own. */
export interface Surroundings {
  readonly cwd: string;
  readonly env: Readonly<Record<string, string | undefined>>;
  readonly stdin: NodeJS.ReadableStream;
  readonly stdoutIsTerminal: boolean;
  /** Columns of the terminal; 80 when there is none. */
  readonly columns: number;
  out(text: string): void;
  err(text: string): void;
  /** Aborted on Ctrl-C and SIGTERM; a command that runs something ends it, cleans up and answers EXIT.interrupted. */
  readonly signal: AbortSignal;
}

export interface Command {
  readonly name: string;
  /** One line for the list of commands: the question it answers. */
  readonly answers: string;
  /** `mortise unit FROM [TO]` */
  readonly usage: string;
  readonly options: Readonly<Record<string, OptionSpec>>;
  /** Longer help: what it reads, what it prints, an example. */
  readonly help: string;
  run(invocation: Invocation, surroundings: Surroundings): Promise<ExitStatus>;
}

/** Options that every command takes. */
export const COMMON_OPTIONS: Readonly<Record<string, OptionSpec>> = {
  json: { type: 'boolean', says: 'print one JSON document instead of text' },
  plain: { type: 'boolean', says: 'print plain lines: no colour, no boxes, no cursor movement' },
  at: { type: 'string', value: 'REV', says: 'read the code at this revision, straight from git' },
  assembly: {
    type: 'string',
    value: 'FILE',
    says: 'the assembly manifest, when not found from the working folder upward',
  },
  jobs: { type: 'string', value: 'N', says: 'how many things to do at once' },
  help: { type: 'boolean', says: 'explain this command' },
};

/** A mistake in how a command was called; printed with what to write instead, exit status 2. */
export class UsageError extends Error {
  override readonly name = 'UsageError';
}
