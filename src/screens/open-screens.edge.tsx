/** The terminal around the screens: Ink draws frames and reads keys; this file enters and leaves the terminal and decides nothing. */
import { spawnSync } from 'node:child_process';
import { type Key as InkKey, render, Text, useInput, useStdout } from 'ink';
import { useEffect, useState } from 'react';
import { drawApp, leave, press, startApp } from './app.ts';
import { frameAnsi, type Size } from './frame.ts';
import type { Glyphs } from './glyphs.ts';
import type { App, Key, Pressed, Wish } from './screen.ts';
import type { Views } from './views.ts';

/** The program behind the screens. */
export interface ScreenHost {
  views(): Views;
  /** Called back whenever the views changed; answers how to stop that. */
  subscribe(listener: () => void): () => void;
  /** Does what was wished, for every wish but leaving and editing; answers one line about it. */
  fulfil(wish: Wish): Promise<string>;
  /** The editor's command words and the file and line to open. */
  editor(wish: Extract<Wish, { do: 'edit' }>): readonly string[];
}

export interface ScreenOptions {
  readonly glyphs: Glyphs;
  readonly colour: boolean;
}

/** Keys typed before the first frame are kept: the terminal passes each on from now, and not by lines. */
function enterScreen(): void {
  process.stdin.setRawMode?.(true);
  process.stdout.write('\u001b[?1049h\u001b[?25l');
}

function leaveScreen(): void {
  process.stdin.setRawMode?.(false);
  process.stdout.write('\u001b[?25h\u001b[?1049l');
}

/** Answers when the user leaves. The terminal is as before, however it ends. */
export async function openScreens(host: ScreenHost, options: ScreenOptions): Promise<void> {
  let app = startApp(host.views());
  const listeners = new Set<() => void>();
  const change = (next: App) => {
    app = next;
    for (const listener of listeners) listener();
  };
  const unsubscribe = host.subscribe(() => change({ ...app, views: host.views() }));
  const restore = leaveScreen;
  enterScreen();
  process.once('exit', restore);
  const onSignal = () => process.exit(143);
  process.once('SIGTERM', onSignal);
  process.once('SIGHUP', onSignal);
  try {
    for (let edit: Edit | null = null, suspended = false, left = false; !left; edit = null, suspended = false) {
      const shown = render(
        <Shown
          read={() => app}
          listen={(listener) => {
            listeners.add(listener);
            return () => listeners.delete(listener);
          }}
          options={options}
          onPressed={(pressed) => {
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
            if (left || edit !== null) shown.unmount();
          }}
          onSuspend={() => {
            suspended = true;
            shown.unmount();
          }}
        />,
        { exitOnCtrlC: false, patchConsole: false },
      );
      await shown.waitUntilExit();
      if (suspended) {
        leaveScreen();
        // The shell gets its terminal back; this line ends when the process is continued.
        process.kill(process.pid, 'SIGSTOP');
        enterScreen();
      }
      if (edit !== null) {
        leaveScreen();
        const [program = 'vi', ...words] = host.editor(edit);
        const { error } = spawnSync(program, words, { stdio: 'inherit' });
        enterScreen();
        app = {
          ...app,
          message: error === undefined ? 'back from the editor' : `the editor could not be started: ${error.message}`,
        };
      }
    }
  } finally {
    unsubscribe();
    process.removeListener('SIGTERM', onSignal);
    process.removeListener('SIGHUP', onSignal);
    process.removeListener('exit', restore);
    restore();
  }
}

type Edit = Extract<Wish, { do: 'edit' }>;

interface ShownProps {
  read(): App;
  listen(listener: () => void): () => void;
  readonly options: ScreenOptions;
  onPressed(pressed: Pressed): void;
  onSuspend(): void;
}

function Shown({ read, listen, options, onPressed, onSuspend }: ShownProps) {
  const { stdout } = useStdout();
  const sizeNow = (): Size => ({ columns: stdout.columns ?? 80, rows: Math.max(1, (stdout.rows ?? 24) - 1) });
  const [, redraw] = useState(0);
  useEffect(() => {
    const again = () => redraw((count) => count + 1);
    stdout.on('resize', again);
    const stop = listen(again);
    return () => {
      stdout.off('resize', again);
      stop();
    };
  }, [stdout, listen]);
  useInput((input, key) => {
    if (key.ctrl && input === 'c') return onPressed(leave(read()));
    if (key.ctrl && input === 'z') return onSuspend();
    for (const one of keysOf(input, key)) onPressed(press(read(), one, sizeNow()));
  });
  return (
    <Text wrap="truncate-end">{frameAnsi(drawApp(read(), sizeNow(), options.glyphs), sizeNow(), options.colour)}</Text>
  );
}

function keysOf(input: string, key: InkKey): Key[] {
  if (key.upArrow) return [{ named: 'up' }];
  if (key.downArrow) return [{ named: 'down' }];
  if (key.leftArrow) return [{ named: 'left' }];
  if (key.rightArrow) return [{ named: 'right' }];
  if (key.pageUp) return [{ named: 'page-up' }];
  if (key.pageDown) return [{ named: 'page-down' }];
  if (key.home) return [{ named: 'home' }];
  if (key.end) return [{ named: 'end' }];
  if (key.return) return [{ named: 'enter' }];
  if (key.escape) return [{ named: 'back' }];
  if (key.backspace || key.delete) return [{ named: 'rub-out' }];
  if (key.ctrl || key.meta) return [];
  // Keys typed faster than they are read arrive together.
  return [...input].flatMap((character): Key[] => {
    if (character === '\r' || character === '\n') return [{ named: 'enter' }];
    if (character === '\u007f' || character === '\b') return [{ named: 'rub-out' }];
    return character >= ' ' ? [{ character }] : [];
  });
}
