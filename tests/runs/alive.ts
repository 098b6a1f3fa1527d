/** Whether processes that must be gone are gone. */
import { readFileSync } from 'node:fs';

/** True while the process exists and is no zombie waiting for its parent. */
export function alive(id: number): boolean {
  try {
    process.kill(id, 0);
  } catch {
    return false;
  }
  try {
    const stat = readFileSync(`/proc/${id}/stat`, 'latin1');
    return stat[stat.lastIndexOf(')') + 2] !== 'Z';
  } catch {
    return process.platform !== 'linux';
  }
}

/** Waits until it holds; throws after ten seconds. What throws counts as not holding yet. */
export async function soon(holds: () => boolean): Promise<void> {
  for (let tries = 0; tries < 200; tries++) {
    try {
      if (holds()) return;
    } catch {
      // Not yet.
    }
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
  throw new Error(`did not come to hold within ten seconds: ${holds}`);
}
