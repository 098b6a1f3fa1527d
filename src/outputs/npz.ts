/**
 * numpy's archives: a ZIP file of npy members, stored or deflated, with 64-bit sizes where needed.
 * @source PKWARE APPNOTE 6.3.10, sections 4.3 and 4.5.3; NumPy documentation, numpy.savez
 */
import { inflateRawSync } from 'node:zlib';
import { type ByteSource, bytesInMemory, readExactly } from './byte-source.ts';
import { openNpy } from './npy.ts';
import { type OutputFile, OutputProblem, outputFile } from './output-file.ts';

/** A deflated member is inflated whole; larger ones should be stored, or written as HDF5. */
const LARGEST_DEFLATED = 1024 ** 3;

interface Member {
  readonly name: string;
  readonly method: number;
  readonly stored: number;
  readonly size: number;
  readonly header: number;
}

export function openNpz(source: ByteSource): OutputFile {
  const members = directory(source).filter((member) => member.name.endsWith('.npy'));
  const opened = new Map<string, OutputFile>();
  const open = (name: string) => {
    const known = opened.get(name);
    if (known !== undefined) return known;
    const file = openNpy(memberBytes(source, members.find((member) => member.name === `${name}.npy`)!));
    opened.set(name, file);
    return file;
  };
  const datasets = members.flatMap((member) => {
    const name = member.name.slice(0, -'.npy'.length);
    try {
      return [{ ...open(name).datasets()[0]!, name }];
    } catch (error) {
      // A member of strings or objects stands beside arrays of numbers in many archives; it is no data set.
      if (error instanceof OutputProblem && error.kind === 'unsupported') return [];
      throw error;
    } finally {
      if (member.method !== 0) opened.delete(name);
    }
  });
  return outputFile({
    path: source.path,
    format: 'npz',
    datasets,
    open: (info) => open(info.name).cursor('array'),
    close: () => source.close(),
  });
}

function directory(source: ByteSource): Member[] {
  const tail = readExactly(source, Math.max(0, source.size - 66_000), Math.min(source.size, 66_000), 'its directory');
  const view = new DataView(tail.buffer);
  let end = tail.length - 22;
  while (end >= 0 && view.getUint32(end, true) !== 0x06054b50) end--;
  if (end < 0) {
    throw new OutputProblem(
      'truncated',
      source.path,
      'has no directory at its end: the archive was not written to the end',
    );
  }
  let [count, at] = [view.getUint16(end + 10, true), view.getUint32(end + 16, true)];
  if ((count === 0xffff || at === 0xffffffff) && end >= 20 && view.getUint32(end - 20, true) === 0x07064b50) {
    const wide = new DataView(
      readExactly(source, Number(view.getBigUint64(end - 12, true)), 56, 'its directory').buffer,
    );
    count = Number(wide.getBigUint64(32, true));
    at = Number(wide.getBigUint64(48, true));
  }
  const members: Member[] = [];
  for (let i = 0; i < count; i++) {
    const entry = new DataView(readExactly(source, at, 46, 'its directory').buffer);
    if (entry.getUint32(0, true) !== 0x02014b50) {
      throw new OutputProblem('damaged', source.path, `has a directory entry that cannot be read at byte ${at}`);
    }
    const [nameLength, extraLength] = [entry.getUint16(28, true), entry.getUint16(30, true)];
    const rest = readExactly(source, at + 46, nameLength + extraLength, 'its directory');
    members.push({
      name: Buffer.from(rest.subarray(0, nameLength)).toString('utf8'),
      method: entry.getUint16(10, true),
      ...wideSizes(entry, new DataView(rest.buffer, nameLength)),
    });
    at += 46 + nameLength + extraLength + entry.getUint16(32, true);
  }
  return members;
}

/** Sizes and offset; each that is all ones in the entry stands, in this order, in the extra field 1. */
function wideSizes(entry: DataView, extra: DataView): Pick<Member, 'stored' | 'size' | 'header'> {
  let [stored, size, header] = [entry.getUint32(20, true), entry.getUint32(24, true), entry.getUint32(42, true)];
  for (let at = 0; at + 4 <= extra.byteLength; at += 4 + extra.getUint16(at + 2, true)) {
    if (extra.getUint16(at, true) !== 1) continue;
    let next = at + 4;
    const wide = (value: number) => {
      if (value !== 0xffffffff) return value;
      next += 8;
      return Number(extra.getBigUint64(next - 8, true));
    };
    size = wide(size);
    stored = wide(stored);
    header = wide(header);
  }
  return { stored, size, header };
}

function memberBytes(source: ByteSource, member: Member): ByteSource {
  const local = new DataView(readExactly(source, member.header, 30, `member ${member.name}`).buffer);
  const start = member.header + 30 + local.getUint16(26, true) + local.getUint16(28, true);
  if (member.method === 0) {
    return {
      path: source.path,
      size: member.size,
      readAt: (offset, into) => source.readAt(start + offset, into.subarray(0, Math.max(0, member.size - offset))),
      close() {},
    };
  }
  if (member.method !== 8 || member.size > LARGEST_DEFLATED) {
    const why =
      member.method === 8
        ? `${member.size} bytes deflated; up to ${LARGEST_DEFLATED}`
        : `method ${member.method}; stored and deflated members`;
    throw new OutputProblem('damaged', source.path, `has a member ${member.name} of ${why} are read`);
  }
  try {
    const bytes = inflateRawSync(readExactly(source, start, member.stored, `member ${member.name}`));
    return bytesInMemory(bytes, source.path);
  } catch (error) {
    if (error instanceof OutputProblem) throw error;
    const says = `has a member ${member.name} that cannot be inflated: ${(error as Error).message}`;
    throw new OutputProblem('damaged', source.path, says, { cause: error });
  }
}
