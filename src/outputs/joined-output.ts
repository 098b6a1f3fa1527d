/** Several files that hold parts of one output (one a rank, one a time) read as one, in the order given. */
import { type ArrayCursor, type DatasetInfo, type OutputFile, OutputProblem, outputFile } from './output-file.ts';

/** Data sets of the same name follow one another along their first extent. */
export function joinOutputs(path: string, files: readonly OutputFile[]): OutputFile {
  const [first] = files;
  if (first === undefined) throw new OutputProblem('missing', path, 'does not exist: no file matches');
  if (files.length === 1) return first;
  return outputFile({
    path,
    format: first.format,
    datasets: first.datasets().map((info) => joined(info, files)),
    open: (info) => chain(files, info.name),
    close: () => {
      for (const file of files) file.close();
    },
  });
}

function joined(info: DatasetInfo, files: readonly OutputFile[]): DatasetInfo {
  if (info.shape.length === 0) return { ...info, shape: [files.length] };
  const [, ...inner] = info.shape;
  let rows: number | null = 0;
  for (const file of files) {
    const part = file.find(info.name)?.shape[0];
    rows = rows === null || part === null || part === undefined ? null : rows + part;
  }
  return { ...info, shape: [rows, ...inner] };
}

function chain(files: readonly OutputFile[], name: string): ArrayCursor {
  let at = 0;
  let cursor: ArrayCursor | null = null;
  return {
    fill(into) {
      let filled = 0;
      while (filled < into.length && at < files.length) {
        cursor ??= files[at]!.cursor(name);
        const count = cursor.fill(into.subarray(filled));
        filled += count;
        if (filled < into.length) {
          cursor.close();
          cursor = null;
          at++;
        }
      }
      return filled;
    },
    close: () => cursor?.close(),
  };
}

/** `rank.10` after `rank.9`: runs of digits are ordered as numbers. */
export function naturalOrder(a: string, b: string): number {
  const [x, y] = [a, b].map((name) => name.match(/\d+|\D+/g) ?? []);
  for (let i = 0; i < Math.min(x!.length, y!.length); i++) {
    const [p, q] = [x![i]!, y![i]!];
    if (p === q) continue;
    const numbers = /^\d/.test(p) && /^\d/.test(q) ? Number(p) - Number(q) : 0;
    return numbers !== 0 ? numbers : p < q ? -1 : 1;
  }
  return x!.length - y!.length;
}
