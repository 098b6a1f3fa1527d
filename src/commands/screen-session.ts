/**
 * What stands behind the screens while they are open: audits, runs, exchanges, records, accepts, follows the files, and tells the
 * screens when something changed. It runs beside the screens, on a thread of its own.
 */
import type { AuditEvent } from '../audit/gather.ts';
import { manifestsUnreadable } from '../manifests/load-manifests.ts';
import type { Finding } from '../model/finding.ts';
import { Register, writerFrom } from '../register/register.edge.ts';
import { readExchange } from '../runs/exchange.ts';
import { recordReference } from '../runs/record-reference.ts';
import { type CaseSwap, swapModules } from '../runs/swap.ts';
import type { Wish } from '../screens/screen.ts';
import { type Known, movingViews, type SettledViews, settledViews, viewsOf } from '../screens/view-models.ts';
import type { Views } from '../screens/views.ts';
import { appendAcceptance } from './accept.edge.ts';
import { type Audited, auditOpened } from './audit.ts';
import { codeSignature } from './code-signature.edge.ts';
import type { Invocation, Surroundings } from './command.ts';
import { type OpenedCode, openCode } from './open-code.ts';
import { registerView } from './register-view.ts';
import { runRequest } from './running.ts';

/** What only the session can do; the rest is done where the terminal is. */
export type SessionWish = Exclude<Wish, { do: 'leave' | 'edit' | 'write file' | 'clipboard' }>;

interface RunningCase {
  readonly state: string;
  readonly seconds: number | null;
  readonly expectedSeconds: number | null;
  readonly since: number;
}

export class ScreenSession {
  private readonly invocation: Invocation;
  private readonly surroundings: Surroundings;
  private opened: OpenedCode;
  private audited: Audited | null = null;
  /** Without history; shown until the first audit is whole. */
  private firstLook: Audited | null = null;
  private swaps: readonly CaseSwap[] = [];
  private job: Known['job'] = null;
  private jobControl: AbortController | null = null;
  private readonly running = new Map<string, RunningCase>();
  private readonly listeners = new Set<() => void>();
  private settled: SettledViews | null = null;
  private reading: Promise<void> | null = null;
  private signature = '';

  constructor(opened: OpenedCode, invocation: Invocation, surroundings: Surroundings) {
    this.opened = opened;
    this.invocation = invocation;
    this.surroundings = surroundings;
  }

  get result(): Audited | null {
    return this.audited;
  }

  get busy(): boolean {
    return this.job !== null;
  }

  /** All that the screens show, the register included, for a printer without a terminal. */
  views(): Views {
    return viewsOf({ ...this.known(), register: registerView(new Register(this.opened.place.root)) });
  }

  /** What the screens show besides the register. The settled part is the same object until it changes. */
  shown(): Omit<Views, 'register'> {
    const known = this.known();
    this.settled ??= settledViews(known);
    return { ...this.settled, ...movingViews(known) };
  }

  subscribe(listener: () => void): () => void {
    this.listeners.add(listener);
    return () => this.listeners.delete(listener);
  }

  /**
   * Audits; the screens follow. A second call while something runs does nothing.
   *
   * @param runs  whether a case may be run now; of the others only a result kept from before is taken
   */
  audit(runs: (name: string) => boolean): Promise<void> {
    return this.work('audit', async (signal) => {
      this.signature = await codeSignature(this.opened);
      const surroundings = { ...this.surroundings, signal };
      const follow = (event: AuditEvent) => this.follow(event);
      // What a moment's reading tells comes first: the history of an old code takes minutes the first time.
      if (this.audited === null) {
        const parts = { history: false, onlyKept: () => true };
        this.firstLook = await auditOpened(this.opened, this.invocation, surroundings, follow, parts);
        this.settled = null;
        this.changed();
      }
      const parts = { onlyKept: (name: string) => !runs(name) };
      const whole = await auditOpened(this.opened, this.invocation, surroundings, follow, parts);
      if (!signal.aborted) this.audited = whole;
    });
  }

  /** Reads everything again when a file that it rests on, or HEAD, is not what it was. Runs nothing. */
  async refresh(): Promise<void> {
    if (this.busy || (await codeSignature(this.opened)) === this.signature) return;
    await this.reread();
  }

  /** Audits with what is kept of the cases and runs none. */
  async read(): Promise<void> {
    this.reading = this.audit(() => false);
    try {
      await this.reading;
    } finally {
      this.reading = null;
    }
  }

  private async reread(): Promise<void> {
    await this.reopen();
    await this.read();
  }

  async fulfil(wish: SessionWish): Promise<string> {
    // A reading takes a moment and is waited for; a run is not.
    if (wish.do !== 'end job') await this.reading?.catch(() => {});
    if (this.job !== null && wish.do !== 'end job') return 'a job is running: wait for it, or end it with E';
    switch (wish.do) {
      case 'run cases': {
        await this.audit((name) => wish.names.includes(name));
        return `${wish.names.length === 1 ? wish.names[0] : `${wish.names.length} cases`}: ${this.ended()}`;
      }
      case 'exchange':
        await this.exchange(wish.words);
        return `${wish.words.join(' ')}: ${this.ended()}`;
      case 'end job':
        this.jobControl?.abort();
        return 'ending the job';
      case 'read again':
        await this.reread();
        return 'read again';
      case 'record':
        return this.record(wish.name, wish.reason);
      case 'accept':
        await this.accept(wish.finding, wish.reason);
        return 'accepted in manifests/accepted.yaml; commit it to keep it';
    }
  }

  close(): void {
    this.jobControl?.abort();
  }

  private known(): Omit<Known, 'register'> & { register: null } {
    return {
      manifests: this.opened.set,
      gathered: (this.audited ?? this.firstLook)?.gathered ?? null,
      audit: (this.audited ?? this.firstLook)?.audit ?? null,
      whole: this.audited !== null,
      swaps: this.swaps,
      register: null,
      job: this.job,
      running: new Map(
        [...this.running].map(([name, one]) => [
          name,
          { ...one, seconds: one.state === 'running' ? (Date.now() - one.since) / 1000 : null },
        ]),
      ),
    };
  }

  private ended(): string {
    return this.jobControl?.signal.aborted === true ? 'ended before it was done' : 'run and compared';
  }

  private async work(says: string, task: (signal: AbortSignal) => Promise<void>): Promise<void> {
    if (this.job !== null) return;
    this.jobControl = new AbortController();
    this.job = { says, done: 0 };
    const ticking = setInterval(() => this.changed(), 500);
    this.changed();
    try {
      await task(this.jobControl.signal);
    } finally {
      clearInterval(ticking);
      this.job = null;
      this.running.clear();
      this.settled = null;
      this.changed();
    }
  }

  private exchange(words: readonly string[]): Promise<void> {
    return this.work(`swap ${words.join(' ')}`, async (signal) => {
      const swaps = await swapModules({
        ...runRequest(this.opened, this.invocation, { ...this.surroundings, signal }),
        exchanges: words.map(readExchange),
        onEvent: (event) => this.follow(event),
      });
      if (!signal.aborted) this.swaps = [...this.swaps, ...swaps];
    });
  }

  private follow(event: AuditEvent): void {
    if (event.what === 'step') this.job = { says: event.step, done: 0 };
    if (event.what === 'read') this.job = { says: `commits ${event.done} of ${event.of}`, done: event.done / event.of };
    if (event.what === 'planned') {
      for (const one of event.cases)
        this.running.set(one.case, { state: 'waiting', seconds: null, expectedSeconds: one.expectedSeconds, since: 0 });
    }
    if (event.what === 'started')
      this.running.set(event.case, {
        state: 'running',
        seconds: 0,
        expectedSeconds: event.expectedSeconds,
        since: Date.now(),
      });
    if (event.what === 'finished') {
      this.running.set(event.case, {
        state: event.class ?? event.state,
        seconds: null,
        expectedSeconds: null,
        since: 0,
      });
      this.job = { says: `cases ${event.done} of ${event.of}`, done: event.done / event.of };
    }
    this.changed();
  }

  /** Manifests that can't be read now leave what was known; the finding is told at the next look. */
  private async reopen(): Promise<void> {
    const opened = await openCode(this.invocation, this.surroundings);
    if (opened.place !== null && !manifestsUnreadable(opened.findings)) this.opened = opened;
    else this.signature = await codeSignature(this.opened);
  }

  private async record(name: string, reason: string): Promise<string> {
    const outcome = this.audited?.gathered.outcomes.find((one) => one.case === name);
    const declared = this.opened.set.cases.get(name)?.value;
    if (outcome === undefined || declared === undefined) return 'run the case first';
    await recordReference({
      root: this.opened.place.root,
      manifestFolder: this.opened.place.folder,
      case: declared,
      outcome,
      reason,
      who: writerFrom(this.surroundings.env).name,
    });
    return `recorded a reference of ${name}; commit it to keep it`;
  }

  private async accept(finding: Finding, reason: string): Promise<void> {
    await appendAcceptance(
      this.opened.place.root,
      this.opened.place.folder,
      finding,
      reason,
      writerFrom(this.surroundings.env).name,
    );
    await this.reread();
  }

  private changed(): void {
    for (const listener of this.listeners) listener();
  }
}
