/** What a command takes for the bytes of default reals: what it was told, what the assembly says, or what the makefiles do. */
import { findAssembly } from '../manifests/manifest-files.edge.ts';
import { printable } from '../model/printable.ts';
import { promotionOf } from '../readers/promotion.ts';
import type { SourceTree } from '../sources/tree.ts';
import { type Invocation, type OptionSpec, type Surroundings, UsageError } from './command.ts';
import { openCode } from './open-code.ts';

export const REAL_BYTES: OptionSpec = {
  type: 'string',
  value: 'N',
  says: 'bytes that the build gives default reals, 4 or 8; else the assembly says it, or the switches in the makefiles',
};

export interface Promoted {
  readonly promote: Readonly<Record<string, number>>;
  /** Where it was read, for people; empty when it was told or nothing is promoted. */
  readonly says: string;
}

/** @throws {UsageError} for another number of bytes */
export async function promotedIn(
  tree: SourceTree,
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<Promoted> {
  const bytes = invocation.options['real-bytes'];
  if (bytes !== undefined && bytes !== '4' && bytes !== '8') throw new UsageError('--real-bytes takes 4 or 8');
  if (bytes !== undefined) return { promote: { real: Number(bytes) }, says: '' };
  const opened = findAssembly(surroundings.cwd) === null ? null : await openCode(invocation, surroundings);
  const build = opened?.place == null ? undefined : opened.set.assembly?.value.build;
  if (build !== undefined) return { promote: build.promote ?? {}, says: '' };
  const found = await promotionOf(tree);
  if (found === null) return { promote: {}, says: '' };
  const said = found.said.map(({ place, text }) => `${text} in ${place.file}:${place.line}`).join(', ');
  return { promote: found.bytes, says: printable(`The build promotes what is declared without a kind: ${said}.`) };
}
