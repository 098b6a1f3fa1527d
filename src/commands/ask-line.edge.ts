/** Questions on the terminal, a line of answer each. */
import { createInterface } from 'node:readline';
import type { Surroundings } from './command.ts';

export interface Questions {
  /** @returns the line without blanks around it; empty when the input has ended */
  ask(question: string): Promise<string>;
  close(): void;
}

export function openQuestions({ stdin, out }: Surroundings): Questions {
  const lines = createInterface({ input: stdin });
  // Lines may come before they are asked for, when they are pasted or piped.
  const early: string[] = [];
  let waiting: ((line: string) => void) | null = null;
  let ended = false;
  const hand = (line: string) => {
    const next = waiting;
    waiting = null;
    next?.(line);
    return next !== null;
  };
  lines.on('line', (line) => {
    if (!hand(line)) early.push(line);
  });
  lines.on('close', () => {
    ended = true;
    hand('');
  });
  return {
    async ask(question) {
      out(question);
      const line =
        early.shift() ??
        (ended
          ? ''
          : await new Promise<string>((done) => {
              waiting = done;
            }));
      return line.trim();
    },
    close: () => lines.close(),
  };
}

/** One question. */
export async function askLine(question: string, surroundings: Surroundings): Promise<string> {
  const questions = openQuestions(surroundings);
  try {
    return await questions.ask(question);
  } finally {
    questions.close();
  }
}
