/**
 * Factors of the network's matrix, kept by step length and by the pieces that all devices are on.
 * A settled plant meets the same few combinations every period, so factoring becomes rare.
 */

/** Most bytes that kept factors may take; when full, all are dropped and gathered anew. */
const CAPACITY_BYTES = 48e6;

const TABLE_SIZE = 1 << 14;

/** Keeps arrays of one size under a pair of 32-bit keys. */
export class FactorCache {
  private readonly size: number;
  private readonly most: number;
  private readonly arrays: Float64Array[] = [];
  private readonly keyA: Int32Array;
  private readonly keyB: Int32Array;
  private readonly table = new Int32Array(TABLE_SIZE).fill(-1);
  private used = 0;

  /** @param size  length of every kept array */
  constructor(size: number) {
    this.size = size;
    // At most half the table is filled, so that probing stays short.
    this.most = Math.max(8, Math.min(TABLE_SIZE / 2, Math.floor(CAPACITY_BYTES / (8 * size + 64))));
    this.keyA = new Int32Array(this.most);
    this.keyB = new Int32Array(this.most);
  }

  /**
   * The array kept under the keys, or undefined. Two different combinations share a pair of
   * keys with a probability of some 2⁻⁶⁴ each: never, in practice.
   */
  find(a: number, b: number): Float64Array | undefined {
    for (let at = (a ^ (b >>> 7)) & (TABLE_SIZE - 1); ; at = (at + 1) & (TABLE_SIZE - 1)) {
      const slot = this.table[at];
      if (slot < 0) return undefined;
      if (this.keyA[slot] === a && this.keyB[slot] === b) return this.arrays[slot];
    }
  }

  /** An array to fill, from now on kept under the keys, which must be new. */
  add(a: number, b: number): Float64Array {
    if (this.used === this.most) {
      this.table.fill(-1);
      this.used = 0;
    }
    const slot = this.used++;
    let at = (a ^ (b >>> 7)) & (TABLE_SIZE - 1);
    while (this.table[at] >= 0) at = (at + 1) & (TABLE_SIZE - 1);
    this.table[at] = slot;
    this.keyA[slot] = a;
    this.keyB[slot] = b;
    this.arrays[slot] ??= new Float64Array(this.size);
    return this.arrays[slot];
  }

  /** Forget the array added last: its factorisation failed. */
  clear(): void {
    this.table.fill(-1);
    this.used = 0;
  }
}
