/** Takes the output of `git cat-file --batch` apart as it comes in, in chunks of any size. Pure. */

export interface StreamedObject {
  readonly id: string;
  /** Empty when missing. */
  readonly type: string;
  /** null when missing, or longer than the limit. */
  readonly bytes: Uint8Array | null;
}

export class ObjectStream {
  private readonly limit: number;
  private readonly give: (object: StreamedObject) => void;
  private header: Buffer = Buffer.alloc(0);
  private current: { id: string; type: string; size: number; bytes: Buffer | null } | null = null;
  private filled = 0;

  constructor(limit: number, give: (object: StreamedObject) => void) {
    this.limit = limit;
    this.give = give;
  }

  push(chunk: Buffer): void {
    let at = 0;
    while (at < chunk.length) at = this.current === null ? this.readHeader(chunk, at) : this.readBody(chunk, at);
  }

  private readHeader(chunk: Buffer, at: number): number {
    const end = chunk.indexOf(10, at);
    if (end < 0) {
      this.header = Buffer.concat([this.header, chunk.subarray(at)]);
      return chunk.length;
    }
    const line = Buffer.concat([this.header, chunk.subarray(at, end)]).toString('latin1');
    this.header = Buffer.alloc(0);
    const [id = '', type = '', size = ''] = line.split(' ');
    if (size === '') {
      this.give({ id, type: '', bytes: null });
    } else {
      const length = Number(size);
      this.current = { id, type, size: length, bytes: length > this.limit ? null : Buffer.allocUnsafeSlow(length) };
      this.filled = 0;
    }
    return end + 1;
  }

  /** The body is followed by one line end that is not part of it. */
  private readBody(chunk: Buffer, at: number): number {
    const current = this.current!;
    const take = Math.min(current.size - this.filled, chunk.length - at);
    current.bytes?.set(chunk.subarray(at, at + take), this.filled);
    this.filled += take;
    if (at + take >= chunk.length) return chunk.length;
    this.current = null;
    this.give({ id: current.id, type: current.type, bytes: current.bytes });
    return at + take + 1;
  }
}
