/**
 * Sums of blocks, added up in the order of the blocks whoever measured them: a sum of doubles depends on its order, and a
 * deviation must not depend on the number of threads.
 */
import { CompensatedSum } from './compensated-sum.ts';
import { SumOfSquares } from './sum-of-squares.ts';

/** Of one block; squares are of numbers multiplied by their scale. */
export class BlockSums {
  readonly absolute: number;
  readonly reference: number;
  readonly scale: number;
  readonly squares: number;
  readonly referenceScale: number;
  readonly referenceSquares: number;

  constructor(
    absolute: number,
    reference: number,
    scale: number,
    squares: number,
    referenceScale: number,
    referenceSquares: number,
  ) {
    this.absolute = absolute;
    this.reference = reference;
    this.scale = scale;
    this.squares = squares;
    this.referenceScale = referenceScale;
    this.referenceSquares = referenceSquares;
  }
}

export interface Totals {
  readonly l1: number;
  readonly l1Reference: number;
  readonly l2: number;
  readonly l2Reference: number;
}

export interface SumLedger {
  add(block: number, sums: BlockSums): void;
}

/** For one thread, which comes by the blocks in order. */
export class RunningLedger implements SumLedger {
  private readonly absolute = new CompensatedSum();
  private readonly squares = new SumOfSquares();
  private readonly reference = new CompensatedSum();
  private readonly referenceSquares = new SumOfSquares();

  add(_block: number, sums: BlockSums): void {
    this.absolute.add(sums.absolute);
    this.squares.add(sums.squares, sums.scale);
    this.reference.add(sums.reference);
    this.referenceSquares.add(sums.referenceSquares, sums.referenceScale);
  }

  totals(): Totals {
    return {
      l1: this.absolute.value,
      l1Reference: this.reference.value,
      l2: this.squares.root,
      l2Reference: this.referenceSquares.root,
    };
  }
}

const ENTRIES = 6;

/** For several threads: a place for the sums of every block, in memory that they share. */
export class SharedLedger implements SumLedger {
  readonly memory: SharedArrayBuffer;
  private readonly entries: Float64Array;

  constructor(memory: SharedArrayBuffer) {
    this.memory = memory;
    this.entries = new Float64Array(memory);
  }

  static forBlocks(blocks: number): SharedLedger {
    return new SharedLedger(new SharedArrayBuffer(blocks * ENTRIES * 8));
  }

  add(block: number, sums: BlockSums): void {
    const { absolute, reference, scale, squares, referenceScale, referenceSquares } = sums;
    const at = block * ENTRIES;
    this.entries[at] = absolute;
    this.entries[at + 1] = reference;
    this.entries[at + 2] = scale;
    this.entries[at + 3] = squares;
    this.entries[at + 4] = referenceScale;
    this.entries[at + 5] = referenceSquares;
  }

  totals(): Totals {
    const running = new RunningLedger();
    for (let at = 0; at < this.entries.length; at += ENTRIES) {
      const [absolute, reference, scale, squares, referenceScale, referenceSquares] = this.entries.subarray(
        at,
        at + ENTRIES,
      );
      running.add(at, new BlockSums(absolute!, reference!, scale!, squares!, referenceScale!, referenceSquares!));
    }
    return running.totals();
  }
}
