/** How a state was reached. */
export interface Arrival {
  readonly cost: number;
  /** Index of the state before, and copies of the edge taken from there. */
  readonly cameFrom: number;
  readonly copies: number;
}

/**
 * The states of one step of the walk programme: rows of bytes, each kept once with its cheapest arrival. Rows lie in one
 * array with a hash table over it (open addressing, FNV-1a), because strings and objects took most of the time.
 */
export class WalkStates {
  count = 0;
  bytes: Uint8Array;
  cost: Float64Array;
  cameFrom: Int32Array;
  copies: Uint8Array;
  private readonly width: number;
  private table: Int32Array;

  constructor(width: number, expected: number) {
    const room = Math.max(16, 2 ** Math.ceil(Math.log2(expected + 1)));
    this.width = width;
    this.bytes = new Uint8Array(room * width);
    this.cost = new Float64Array(room);
    this.cameFrom = new Int32Array(room);
    this.copies = new Uint8Array(room);
    this.table = new Int32Array(2 * room).fill(-1);
  }

  /** The one state before the first edge: nothing used. */
  static beginning(width: number): WalkStates {
    const states = new WalkStates(width, 1);
    states.offer(new Uint8Array(width), { cost: 0, cameFrom: -1, copies: 0 });
    return states;
  }

  /** Keeps the row, or the cheaper arrival when the row is known; the earlier one on a tie. */
  offer(row: Uint8Array, arrival: Arrival): void {
    const slot = this.find(row);
    const known = this.table[slot]!;
    if (known >= 0) {
      if (arrival.cost < this.cost[known]!) this.write(known, arrival);
      return;
    }
    if (this.count === this.cost.length) {
      this.grow();
      this.offer(row, arrival);
      return;
    }
    this.table[slot] = this.count;
    this.bytes.set(row, this.count * this.width);
    this.write(this.count, arrival);
    this.count += 1;
  }

  private write(index: number, { cost, cameFrom, copies }: Arrival): void {
    this.cost[index] = cost;
    this.cameFrom[index] = cameFrom;
    this.copies[index] = copies;
  }

  private find(row: Uint8Array): number {
    let hash = 0x811c9dc5;
    for (let at = 0; at < row.length; at++) hash = Math.imul(hash ^ row[at]!, 0x01000193);
    const mask = this.table.length - 1;
    let slot = (hash ^ (hash >>> 15)) & mask;
    while (this.table[slot]! >= 0 && !this.isAt(this.table[slot]!, row)) slot = (slot + 1) & mask;
    return slot;
  }

  private isAt(index: number, row: Uint8Array): boolean {
    const from = index * this.width;
    for (let at = 0; at < row.length; at++) if (this.bytes[from + at] !== row[at]) return false;
    return true;
  }

  private grow(): void {
    const room = this.cost.length * 2;
    this.bytes = extended(this.bytes, new Uint8Array(room * this.width));
    this.cost = extended(this.cost, new Float64Array(room));
    this.cameFrom = extended(this.cameFrom, new Int32Array(room));
    this.copies = extended(this.copies, new Uint8Array(room));
    this.table = new Int32Array(2 * room).fill(-1);
    for (let index = 0; index < this.count; index++) {
      this.table[this.find(this.bytes.subarray(index * this.width, (index + 1) * this.width))] = index;
    }
  }
}

function extended<T extends Uint8Array | Float64Array | Int32Array>(from: T, to: T): T {
  to.set(from);
  return to;
}
