/** One question on the terminal, one line of answer. */
import { createInterface } from 'node:readline';
import type { Surroundings } from './command.ts';

/** @returns the line without its end; empty when the input ends before one */
export async function askLine(question: string, { stdin, out }: Surroundings): Promise<string> {
  out(question);
  const lines = createInterface({ input: stdin });
  try {
    return await new Promise<string>((done) => {
      lines.once('line', done);
      lines.once('close', () => done(''));
    });
  } finally {
    lines.close();
  }
}
