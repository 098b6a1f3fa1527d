/** What stands behind the screens while they are open: audits, runs, records, accepts, and tells the screens when something changed. */
import type { AuditEvent } from '../audit/gather.ts';
import type { Finding } from '../model/finding.ts';
import { resultText, standingText } from '../register/find.ts';
import { plainYaml } from '../register/plain-yaml.ts';
import { Register, writerFrom } from '../register/register.edge.ts';
import type { CaseOutcome } from '../runs/case-outcome.ts';
import { recordReference } from '../runs/record-reference.ts';
import type { ScreenHost } from '../screens/open-screens.edge.tsx';
import type { Wish } from '../screens/screen.ts';
import { type Known, viewsOf } from '../screens/view-models.ts';
import type { RegisterView, Views } from '../screens/views.ts';
import { appendAcceptance } from './accept.edge.ts';
import { type Audited, auditOpened } from './audit.ts';
import type { Invocation, Surroundings } from './command.ts';
import { writeWhole } from './files.edge.ts';
import { type OpenedCode, openCode } from './open-code.ts';

export class ScreenSession implements ScreenHost {
  private readonly invocation: Invocation;
  private readonly surroundings: Surroundings;
  private opened: OpenedCode;
  private audited: Audited | null = null;
  private job: Known['job'] = null;
  private jobControl: AbortController | null = null;
  private running = new Map<
    string,
    { state: string; seconds: number | null; expectedSeconds: number | null; since: number }
  >();
  private readonly listeners = new Set<() => void>();
  private drawn: Views | null = null;

  constructor(opened: OpenedCode, invocation: Invocation, surroundings: Surroundings) {
    this.opened = opened;
    this.invocation = invocation;
    this.surroundings = surroundings;
  }

  get result(): Audited | null {
    return this.audited;
  }

  views(): Views {
    this.drawn ??= viewsOf({
      manifests: this.opened.set,
      gathered: this.audited?.gathered ?? null,
      audit: this.audited?.audit ?? null,
      register: registerView(new Register(this.opened.place.root)),
      job: this.job,
      running: new Map(
        [...this.running].map(([name, one]) => [
          name,
          { ...one, seconds: one.state === 'running' ? (Date.now() - one.since) / 1000 : null },
        ]),
      ),
    });
    return this.drawn;
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
    return [...words, `+${line}`, `${this.opened.place.root}/${file}`];
  }

  /** Audits in the background; the screens follow. A second call while one runs does nothing. */
  audit(): Promise<void> {
    return this.work('audit', (signal) => this.auditOnce(signal));
  }

  async fulfil(wish: Wish): Promise<string> {
    switch (wish.do) {
      case 'run cases':
        if (this.job !== null) return 'a job is running already';
        await this.audit();
        return `${wish.names.join(', ')}: run and compared`;
      case 'end job':
        this.jobControl?.abort();
        return 'ended';
      case 'read again':
        await this.reopen();
        await this.audit();
        return 'read again';
      case 'record':
        return this.record(wish.name, wish.reason);
      case 'accept':
        await this.accept(wish.finding, wish.reason);
        return 'accepted in manifests/accepted.yaml; commit it to keep it';
      case 'write file':
        await writeWhole(this.surroundings.cwd, wish.name, wish.text);
        return `written to ${wish.name}`;
      case 'clipboard':
        // OSC 52 hands the text to the terminal, which owns the clipboard, also over SSH.
        this.surroundings.out(`\u001b]52;c;${Buffer.from(wish.text, 'utf8').toString('base64')}\u0007`);
        return 'copied';
      default:
        return '';
    }
  }

  close(): void {
    this.jobControl?.abort();
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
      this.changed();
    }
  }

  private async auditOnce(signal: AbortSignal): Promise<void> {
    const audited = await auditOpened(this.opened, this.invocation, { ...this.surroundings, signal }, (event) =>
      this.follow(event),
    );
    if (!signal.aborted) this.audited = audited;
  }

  private follow(event: AuditEvent): void {
    if (event.what === 'step') this.job = { says: event.step, done: this.job?.done ?? 0 };
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

  private async reopen(): Promise<void> {
    const opened = await openCode(this.invocation, this.surroundings);
    if (opened.place !== null) this.opened = opened;
  }

  private async record(name: string, reason: string): Promise<string> {
    const outcome: CaseOutcome | undefined = this.audited?.gathered.outcomes.find((one) => one.case === name);
    const declared = this.opened.set.cases.get(name)?.value;
    if (outcome === undefined || declared === undefined) return 'run the case first';
    const who = writerFrom(this.surroundings.env).name;
    await recordReference({
      root: this.opened.place.root,
      manifestFolder: this.opened.place.folder,
      case: declared,
      outcome,
      reason,
      who,
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
    await this.reopen();
    await this.audit();
  }

  private changed(): void {
    this.drawn = null;
    for (const listener of this.listeners) listener();
  }
}

function registerView(register: Register): RegisterView | null {
  const index = register.index();
  if (index.total === 0) return null;
  return {
    total: index.total,
    find: (text, from, count) =>
      index
        .find({ text }, from, count)
        .map((one) => ({ id: one.id, date: one.day, result: one.result, standing: one.standing })),
    count: (text) => index.count({ text }),
    entry: (id) => {
      const entry = register.entry(id);
      if (entry === null) return ['this entry can not be read'];
      return [
        `${entry.id}  ${standingText(entry)}`,
        resultText(entry.content.result),
        '',
        ...plainYaml(JSON.parse(JSON.stringify(entry.content))).split('\n'),
      ];
    },
    notices: register
      .notices()
      .filter((one) => one.lifted === null)
      .map((one) => `${one.content.module} ${one.content.versions ?? ''}: ${one.content.title}`),
  };
}
