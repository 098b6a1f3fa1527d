/** The session of the screens on its own thread: wishes come in, views and answers go out. */
import { parentPort, workerData } from 'node:worker_threads';
import { manifestsUnreadable } from '../manifests/load-manifests.ts';
import { printable } from '../model/printable.ts';
import { findingsText } from '../report/finding-text.ts';
import { auditStatus } from './audit.ts';
import type { Surroundings } from './command.ts';
import { openCode } from './open-code.ts';
import type { FromSession, SessionStart, ToSession } from './screen-link.edge.ts';
import { ScreenSession } from './screen-session.ts';
import { keepSeen, type ShownViews } from './seen-views.edge.ts';
import { textOptions } from './text-options.ts';

/** Frames closer together than this are not seen; the views between them are not sent. */
const BETWEEN_VIEWS = 50;
const BETWEEN_LOOKS = 2000;

const port = parentPort!;
const { cwd, columns, invocation, runs } = workerData as SessionStart;
const say = (message: FromSession) => port.postMessage(message);
const control = new AbortController();
const surroundings: Surroundings = {
  cwd,
  env: process.env,
  stdin: process.stdin,
  stdoutIsTerminal: false,
  columns,
  out: () => {},
  err: () => {},
  signal: control.signal,
};

const opened = await openCode(invocation, surroundings);
if (opened.place === null || manifestsUnreadable(opened.findings)) {
  say({ say: 'unreadable', text: findingsText(opened.findings, textOptions(invocation, surroundings)) });
} else {
  const session = new ScreenSession(opened, invocation, surroundings);
  let sent: Partial<ShownViews> = {};
  let waiting = false;
  const send = () => {
    waiting = false;
    const views = session.shown();
    const fresh = Object.fromEntries(
      Object.entries(views).filter(([name, value]) => value !== sent[name as keyof ShownViews]),
    ) as Partial<ShownViews>;
    sent = views;
    say({ say: 'views', views: fresh });
  };
  session.subscribe(() => {
    if (waiting) return;
    waiting = true;
    setTimeout(send, BETWEEN_VIEWS);
  });
  const settle = () => {
    if (session.result === null) return;
    keepSeen(opened.place, process.env, session.shown());
    say({ say: 'status', status: auditStatus(session.result) });
  };
  const looking = setInterval(() => void session.refresh().then(settle, () => {}), BETWEEN_LOOKS);
  port.on('message', async (message: ToSession) => {
    if (message.ask === 'close') {
      clearInterval(looking);
      session.close();
      const idle = setInterval(() => {
        if (session.busy) return;
        clearInterval(idle);
        port.close();
        process.exit(0);
      }, 20);
      return;
    }
    const answer = await session.fulfil(message.wish).catch((error: Error) => printable(error.message));
    settle();
    say({ say: 'answer', to: message.number, text: answer });
  });
  try {
    await (runs ? session.audit(() => true) : session.read());
    settle();
  } catch (error) {
    say({ say: 'unreadable', text: `mortise: ${printable((error as Error).message)}\n` });
  }
}
