/** Names from bytes: each spelling becomes a string once, however often a code writes it. */

/** Letters, digits, underscore; capitals and small ones alike. */
export const WORD = new Uint8Array(256);
/** Small letters for capitals, everything else as it is. */
export const LOWER = new Uint8Array(256);
for (let byte = 0; byte < 256; byte++) {
  LOWER[byte] = byte >= 65 && byte <= 90 ? byte + 32 : byte;
  if (
    (byte >= 48 && byte <= 57) ||
    (byte >= 65 && byte <= 90) ||
    (byte >= 97 && byte <= 122) ||
    byte === 95 ||
    byte === 36
  )
    WORD[byte] = 1;
}

/** More distinct names than any one code has: beyond it the table starts anew, so that memory stays bounded. */
const MOST = 1 << 18;
/** Longer stretches are seldom written twice: they are made into strings without a place in the table. */
const LONGEST = 64;

/**
 * A table of spellings. Open addressing over a hash of the bytes; looking a known name up makes no string.
 * Names are folded to lower case, as Fortran compares them. `flags` hold what a caller marks a name with.
 */
export class Names {
  private slots = new Int32Array(1 << 13).fill(-1);
  private hashes = new Int32Array(1 << 12);
  private offsets = new Int32Array((1 << 12) + 1);
  private pool = new Uint8Array(1 << 16);
  private count = 0;
  private texts: string[] = [];
  private readonly ids = new Map<string, number>();
  flags = new Uint8Array(1 << 12);
  /** For callers who mark a set of names: a name is in the set when its stamp is the set's number. */
  stamps = new Int32Array(1 << 12);
  private readonly preset: readonly (readonly [string, number])[];

  /** @param preset  words known from the start, with their flags */
  constructor(preset: readonly (readonly [string, number])[] = []) {
    this.preset = preset;
    this.addPreset();
  }

  private addPreset(): void {
    for (const [word, flag] of this.preset) {
      const bytes = Buffer.from(word, 'latin1');
      const id = this.idOf(bytes, 0, bytes.length);
      if (id >= 0) this.flags[id] = this.flags[id]! | flag;
    }
  }

  /** Starts anew when the table has grown beyond all measure; only between two files. */
  trim(): void {
    if (this.count < MOST) return;
    this.slots.fill(-1);
    this.count = 0;
    this.texts = [];
    this.ids.clear();
    this.flags.fill(0);
    this.stamps.fill(0);
    this.offsets[0] = 0;
    this.addPreset();
  }

  /** The number of a spelling, entered when it is new; -1 for one too long to be kept. */
  idOf(bytes: Uint8Array, from: number, to: number): number {
    return this.find(bytes, from, to, true);
  }

  /** The number of a spelling that is already known, else -1. */
  known(bytes: Uint8Array, from: number, to: number): number {
    return this.find(bytes, from, to, false);
  }

  private find(bytes: Uint8Array, from: number, to: number, enter: boolean): number {
    if (to - from > LONGEST) return -1;
    let hash = 0;
    for (let at = from; at < to; at++) hash = (Math.imul(hash, 31) + LOWER[bytes[at]!]!) | 0;
    return this.findHashed(bytes, from, to, hash, enter);
  }

  /** The same for who has made the hash on the way: 31 times the hash so far plus the byte in lower case. */
  knownHashed(bytes: Uint8Array, from: number, to: number, hash: number): number {
    return to - from > LONGEST ? -1 : this.findHashed(bytes, from, to, hash, false);
  }

  private findHashed(bytes: Uint8Array, from: number, to: number, raw: number, enter: boolean): number {
    const length = to - from;
    const hash = raw ^ (raw >>> 15);
    const mask = this.slots.length - 1;
    let slot = hash & mask;
    for (let id = this.slots[slot]!; id >= 0; id = this.slots[slot]!) {
      if (this.hashes[id] === hash && this.same(id, bytes, from, length)) return id;
      slot = (slot + 1) & mask;
    }
    return enter ? this.enter(bytes, from, to, hash, slot) : -1;
  }

  private same(id: number, bytes: Uint8Array, from: number, length: number): boolean {
    const start = this.offsets[id]!;
    if (this.offsets[id + 1]! - start !== length) return false;
    const { pool } = this;
    for (let at = 0; at < length; at++) if (pool[start + at] !== LOWER[bytes[from + at]!]) return false;
    return true;
  }

  private enter(bytes: Uint8Array, from: number, to: number, hash: number, slot: number): number {
    const id = this.count++;
    const start = this.offsets[id]!;
    if (start + LONGEST > this.pool.length) this.pool = grown(this.pool);
    let end = start;
    for (let at = from; at < to; at++) this.pool[end++] = LOWER[bytes[at]!]!;
    this.hashes[id] = hash;
    this.offsets[id + 1] = end;
    this.flags[id] = 0;
    this.stamps[id] = 0;
    this.slots[slot] = id;
    const text = Buffer.from(this.pool.buffer, this.pool.byteOffset, this.pool.length).latin1Slice(start, end);
    this.texts.push(text);
    this.ids.set(text, id);
    if (id + 2 >= this.hashes.length) {
      this.hashes = grown(this.hashes);
      this.offsets = grown(this.offsets);
      this.flags = grown(this.flags);
      this.stamps = grown(this.stamps);
    }
    if (this.count * 2 > this.slots.length) this.spread();
    return id;
  }

  private spread(): void {
    this.slots = new Int32Array(this.slots.length * 2).fill(-1);
    const mask = this.slots.length - 1;
    for (let id = 0; id < this.count; id++) {
      let slot = this.hashes[id]! & mask;
      while (this.slots[slot]! >= 0) slot = (slot + 1) & mask;
      this.slots[slot] = id;
    }
  }

  /** Marks a name that was made here as one of set number `stamp`. */
  stamp(name: string, stamp: number): void {
    const id = this.ids.get(name);
    if (id !== undefined) this.stamps[id] = stamp;
  }

  text(id: number): string {
    return this.texts[id]!;
  }

  /** The spelling in lower case, as one string for all its places. */
  name(bytes: Uint8Array, from: number, to: number): string {
    const id = this.find(bytes, from, to, true);
    if (id >= 0) return this.texts[id]!;
    return Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length).latin1Slice(from, to).toLowerCase();
  }
}

function grown<T extends Int32Array | Uint8Array>(array: T): T {
  const larger = new (array.constructor as new (length: number) => T)(array.length * 2);
  larger.set(array);
  return larger;
}
