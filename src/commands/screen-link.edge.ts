/** Ties the screens, on the thread of the terminal, to the session that does the work, on another. Holds the last views and nothing else. */
import { Worker } from 'node:worker_threads';
import type { AssemblyPlace } from '../manifests/manifest-files.edge.ts';
import type { ScreenHost } from '../screens/open-screens.edge.ts';
import type { Wish } from '../screens/screen.ts';
import type { RegisterView, Views } from '../screens/views.ts';
import { builtAsset } from '../sources/assets.edge.ts';
import { EXIT, type ExitStatus, type Invocation, type Surroundings } from './command.ts';
import { writeWhole } from './files.edge.ts';
import type { SessionWish } from './screen-session.ts';
import { readSeen, type ShownViews } from './seen-views.edge.ts';

export interface SessionStart {
  readonly cwd: string;
  readonly columns: number;
  readonly invocation: Invocation;
  /** Whether the first audit runs the cases, or takes what is kept of them. */
  readonly runs: boolean;
}

export type ToSession =
  | { readonly ask: 'wish'; readonly number: number; readonly wish: SessionWish }
  | { readonly ask: 'close' };

export type FromSession =
  | { readonly say: 'views'; readonly views: Partial<ShownViews> }
  | { readonly say: 'status'; readonly status: ExitStatus }
  | { readonly say: 'answer'; readonly to: number; readonly text: string }
  /** The manifests can't be read: the text says why. */
  | { readonly say: 'unreadable'; readonly text: string };

const NOTHING_YET: Views = {
  assembly: {
    title: 'reading the manifests',
    revision: '',
    changed: [],
    outcome: null,
    open: 0,
    why: [],
    parts: [],
    campaign: null,
    notices: [],
    caution: null,
    asOf: null,
    job: { says: 'manifests', done: 0 },
  },
  joints: [],
  histories: [],
  cases: [],
  deviations: [],
  swap: null,
  register: null,
  findings: [],
};

/** The session knows nothing of the register; its notices belong to the assembly all the same. */
function withNotices(views: Views): Views {
  return { ...views, assembly: { ...views.assembly, notices: views.register?.notices ?? [] } };
}

export class ScreenLink implements ScreenHost {
  /** Null until the first audit has ended. */
  status: ExitStatus | null = null;
  /** Why the manifests can't be read; the screens close then. */
  unreadable: string | null = null;

  private readonly place: AssemblyPlace;
  private readonly surroundings: Surroundings;
  private readonly worker: Worker;
  private readonly listeners = new Set<() => void>();
  private readonly answers = new Map<number, (text: string) => void>();
  private readonly ended: Promise<void>;
  private held: Views;
  private register: Promise<RegisterView | null> | null = null;
  private number = 0;

  constructor(place: AssemblyPlace, invocation: Invocation, surroundings: Surroundings, runs: boolean) {
    this.place = place;
    this.surroundings = surroundings;
    const seen = readSeen(place, surroundings.env);
    this.held =
      seen === null
        ? NOTHING_YET
        : {
            ...seen.views,
            register: null,
            assembly: {
              ...seen.views.assembly,
              asOf: `${seen.when.slice(0, 16).replace('T', ' ')} UTC`,
              job: NOTHING_YET.assembly.job,
            },
          };
    const start: SessionStart = { cwd: surroundings.cwd, columns: surroundings.columns, invocation, runs };
    this.worker = new Worker(builtAsset('screen-session.worker.js'), {
      workerData: start,
      env: surroundings.env as NodeJS.ProcessEnv,
    });
    this.ended = new Promise((done) => this.worker.once('exit', () => done()));
    this.worker.on('message', (message: FromSession) => this.hear(message));
    this.worker.on('error', (error) => {
      this.unreadable = `mortise: a fault of this program: ${error.stack ?? error.message}\n`;
      this.changed();
    });
  }

  views(): Views {
    return this.held;
  }

  get over(): boolean {
    return this.unreadable !== null;
  }

  subscribe(listener: () => void): () => void {
    this.listeners.add(listener);
    return () => this.listeners.delete(listener);
  }

  editor(wish: Extract<Wish, { do: 'edit' }>): readonly string[] {
    const { file, line } = wish.finding.place;
    const words = (this.surroundings.env.VISUAL ?? this.surroundings.env.EDITOR ?? 'vi')
      .split(/\s+/)
      .filter((word) => word !== '');
    // "+LINE FILE" is what the editors of the trade take (POSIX ex and vi, and most others after them).
    return [...words, `+${line}`, `${this.place.root}/${file}`];
  }

  async fulfil(wish: Wish): Promise<string> {
    switch (wish.do) {
      case 'leave':
      case 'edit':
        return '';
      case 'write file':
        await writeWhole(this.surroundings.cwd, wish.name, wish.text);
        return `written to ${wish.name}`;
      case 'clipboard':
        // OSC 52 hands the text to the terminal, which owns the clipboard, also over SSH.
        this.surroundings.out(`\u001b]52;c;${Buffer.from(wish.text, 'utf8').toString('base64')}\u0007`);
        return 'copied';
      default:
        return this.ask(wish);
    }
  }

  /** Ends a running job and waits until nothing of it is left. */
  async close(): Promise<void> {
    this.worker.postMessage({ ask: 'close' } satisfies ToSession);
    await this.ended;
  }

  private ask(wish: SessionWish): Promise<string> {
    const number = ++this.number;
    this.worker.postMessage({ ask: 'wish', number, wish } satisfies ToSession);
    return new Promise((done) => this.answers.set(number, done));
  }

  private hear(message: FromSession): void {
    switch (message.say) {
      case 'views':
        this.held = withNotices({ ...this.held, ...message.views });
        if (message.views.findings !== undefined) void this.readRegister();
        break;
      case 'status':
        this.status = message.status;
        return;
      case 'answer':
        this.answers.get(message.to)?.(message.text);
        this.answers.delete(message.to);
        return;
      case 'unreadable':
        this.unreadable = message.text;
        this.status = EXIT.usage;
        break;
    }
    this.changed();
  }

  /** Read after the first frame, since opening it takes longer than drawing one. */
  private async readRegister(): Promise<void> {
    this.register ??= this.openRegister();
    const register = await this.register;
    this.register = null;
    if (register === null) return;
    this.held = withNotices({ ...this.held, register });
    this.changed();
  }

  private async openRegister(): Promise<RegisterView | null> {
    const [{ Register }, { registerView }] = await Promise.all([
      import('../register/register.edge.ts'),
      import('./register-view.ts'),
    ]);
    return registerView(new Register(this.place.root));
  }

  private changed(): void {
    for (const listener of this.listeners) listener();
  }
}
