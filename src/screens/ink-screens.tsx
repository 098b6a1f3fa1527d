/** The screens drawn by Ink, and its keys as the screens name them. Loaded after the first frame, since Ink takes longer than that frame. */
import { type Key as InkKey, render, Text, useInput, useStdout } from 'ink';
import { useEffect, useState } from 'react';
import { drawApp, leave, press } from './app.ts';
import { frameAnsi, type Size } from './frame.ts';
import type { App, Key, Pressed, ScreenOptions } from './screen.ts';

export interface ShownProps {
  read(): App;
  /** Called back at every change; answers how to stop that. */
  listen(listener: () => void): () => void;
  readonly options: ScreenOptions;
  onPressed(pressed: Pressed): void;
  onSuspend(): void;
}

export interface ShownScreens {
  unmount(): void;
  waitUntilExit(): Promise<unknown>;
}

export function showScreens(props: ShownProps): ShownScreens {
  return render(<Shown {...props} />, { exitOnCtrlC: false, patchConsole: false });
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
