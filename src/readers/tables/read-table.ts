/** Tables: bytes come in, or a file on disk that is read no further than needed; data sets, axes and claims go out. */
import { emptyInterface, type FileInterface } from '../../model/interface.ts';
import { openBytes } from '../../outputs/byte-source.edge.ts';
import { openOutput, openOutputBytes } from '../../outputs/open-output.edge.ts';
import { type OutputFile, OutputProblem } from '../../outputs/output-file.ts';
import { HEAD_BYTES } from '../../outputs/text-table.ts';
import { describeTable } from './describe-table.ts';
import { isMetadataTable, readMetadataTable } from './metadata-table.ts';

/** HDF5, NetCDF, npy, npz, FITS, columns, CSV and metadata tables, told by their content. Any bytes give a result. */
export async function readTable(path: string, bytes: Uint8Array): Promise<FileInterface> {
  const head = textOf(bytes.subarray(0, HEAD_BYTES));
  if (isMetadataTable(head)) return readMetadataTable(textOf(bytes));
  return described(head, () => openOutputBytes(bytes, path));
}

/**
 * The same for a file in the work tree: of HDF5, NetCDF and npy only headers and axes are read, whatever the size.
 *
 * @param file  absolute
 */
export async function readTableFile(file: string): Promise<FileInterface> {
  const first = new Uint8Array(HEAD_BYTES);
  const source = openBytes(file);
  let head: string;
  try {
    head = textOf(first.subarray(0, source.readAt(0, first)));
    if (isMetadataTable(head)) {
      const whole = new Uint8Array(source.size);
      return readMetadataTable(textOf(whole.subarray(0, source.readAt(0, whole))));
    }
  } finally {
    source.close();
  }
  return described(head, () => openOutput(file));
}

async function described(head: string, open: () => Promise<OutputFile>): Promise<FileInterface> {
  try {
    const file = await open();
    try {
      return describeTable(file, head);
    } finally {
      file.close();
    }
  } catch (error) {
    if (!(error instanceof OutputProblem)) throw error;
    return { ...emptyInterface('table'), incomplete: [{ line: 1, why: `the file ${error.message}` }] };
  }
}

function textOf(bytes: Uint8Array): string {
  return Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length)
    .toString('utf8')
    .replace(/^\ufeff/, '');
}
