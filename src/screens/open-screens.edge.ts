/** The terminal around the screens: enters and leaves it, draws the first frame, hands keys and frames to Ink. Decides nothing. */
import { spawnSync } from 'node:child_process';
import { drawApp, startApp } from './app.ts';
import { frameAnsi } from './frame.ts';
import type { ShownScreens } from './ink-screens.tsx';
import type { App, Pressed, ScreenOptions, Wish } from './screen.ts';
import type { Views } from './views.ts';

/** The program behind the screens. */
export interface ScreenHost {
  views(): Views;
  /** True once there is nothing to show any more. */
  readonly over: boolean;
  /** Called back whenever the views changed; answers how to stop that. */
  subscribe(listener: () => void): () => void;
  /** Does what was wished, for every wish but leaving and editing; answers one line about it. */
  fulfil(wish: Wish): Promise<string>;
  /** The editor's command words and the file and line to open. */
  editor(wish: Extract<Wish, { do: 'edit' }>): readonly string[];
}

/** Answers when the user leaves. The terminal is as before, however it ends. */
export async function openScreens(host: ScreenHost, options: ScreenOptions): Promise<void> {
  let app = startApp(host.views());
  const listeners = new Set<() => void>();
  let shown: ShownScreens | null = null;
  const change = (next: App) => {
    app = next;
    for (const listener of listeners) listener();
  };
  const unsubscribe = host.subscribe(() => {
    change({ ...app, views: host.views() });
    if (host.over) shown?.unmount();
  });
  process.once('exit', leaveScreen);
  const onSignal = () => process.exit(143);
  process.once('SIGTERM', onSignal);
  process.once('SIGHUP', onSignal);
  try {
    enterScreen();
    const size = { columns: process.stdout.columns ?? 80, rows: Math.max(1, (process.stdout.rows ?? 24) - 1) };
    process.stdout.write(frameAnsi(drawApp(app, size, options.glyphs), size, options.colour));
    const { showScreens } = await import('./ink-screens.tsx');
    // Ink begins where the first frame began, and knows nothing of it.
    process.stdout.write(BEGIN_AGAIN);
    for (let left = false; !left && !host.over; ) {
      let edit: Edit | null = null;
      let suspended = false;
      shown = showScreens({
        read: () => app,
        listen: (listener) => {
          listeners.add(listener);
          return () => listeners.delete(listener);
        },
        options,
        onPressed: (pressed: Pressed) => {
          change(pressed.app);
          for (const wish of pressed.wishes) {
            if (wish.do === 'leave') left = true;
            else if (wish.do === 'edit') edit = wish;
            else
              void host.fulfil(wish).then(
                (message) => change({ ...app, message }),
                (error: Error) => change({ ...app, message: error.message }),
              );
          }
          if (left || edit !== null) shown?.unmount();
        },
        onSuspend: () => {
          suspended = true;
          shown?.unmount();
        },
      });
      await shown.waitUntilExit();
      if (suspended) suspend();
      if (edit !== null) app = { ...app, message: editIn(host.editor(edit)) };
    }
  } finally {
    unsubscribe();
    process.removeListener('SIGTERM', onSignal);
    process.removeListener('SIGHUP', onSignal);
    process.removeListener('exit', leaveScreen);
    leaveScreen();
  }
}

type Edit = Extract<Wish, { do: 'edit' }>;

const BEGIN_AGAIN = '\u001b[H\u001b[J';

/** Keys typed before the first frame are kept: the terminal passes each on from now, and not by lines. */
function enterScreen(): void {
  process.stdin.setRawMode?.(true);
  process.stdout.write('\u001b[?1049h\u001b[?25l\u001b[H');
}

function leaveScreen(): void {
  process.stdin.setRawMode?.(false);
  process.stdout.write('\u001b[?25h\u001b[?1049l');
}

/** The shell gets its terminal back; answers when the process is continued. */
function suspend(): void {
  leaveScreen();
  process.kill(process.pid, 'SIGSTOP');
  enterScreen();
}

/** @returns a line about how it went */
function editIn([program = 'vi', ...words]: readonly string[]): string {
  leaveScreen();
  const { error } = spawnSync(program, words, { stdio: 'inherit' });
  enterScreen();
  return error === undefined ? 'back from the editor' : `the editor could not be started: ${error.message}`;
}
