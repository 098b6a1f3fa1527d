/** Opens a result file of any format that Mortise reads, told by its content. */

import { openBytes } from './byte-source.edge.ts';
import type { ByteSource } from './byte-source.ts';
import { openJson } from './json-values.ts';
import { openNpy } from './npy.ts';
import { type OutputFile, OutputProblem } from './output-file.ts';
import { recognise } from './recognise.ts';
import { layoutOf, openTextTable } from './text-table.ts';

/**
 * @param path absolute, or relative to the working folder
 * @returns the file, open; close it after use
 * @throws {OutputProblem} `missing`, `empty`, `truncated`, `damaged` or `unsupported`, each with what was found
 */
export async function openOutput(path: string): Promise<OutputFile> {
  const source = openBytes(path);
  try {
    return await openSource(source);
  } catch (error) {
    source.close();
    throw error;
  }
}

async function openSource(source: ByteSource): Promise<OutputFile> {
  if (source.size === 0) throw new OutputProblem('empty', source.path, 'is empty: not a single byte was written');
  const head = new Uint8Array(Math.min(source.size, 1 << 16));
  source.readAt(0, head);
  switch (recognise(head, source.size)) {
    case 'npy':
      return openNpy(source);
    case 'json':
      return openJson(source);
    case 'text': {
      const layout = layoutOf(source);
      if (layout === null) throw new OutputProblem('unsupported', source.path, 'holds text, but no rows of numbers');
      return openTextTable(source, layout);
    }
    default:
      throw new OutputProblem('unsupported', source.path, 'is of a format that is not read');
  }
}
