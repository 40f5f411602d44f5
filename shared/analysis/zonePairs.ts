/**
 * Zones of two maps paired so that as few vines as possible change zone: a zone that only got another number counts as the same.
 * In: zone of each vine in both maps, from 1. Out: pairs, and vines outside them. Cost: vines, plus the cube of the number of zones.
 * To take the largest shared part first is not enough: of 1980 and 1862 vines of one zone it takes the 1980, though the zone they
 * go to has another that fits nowhere else. Source of the assignment: Kuhn 1955, with the potentials of Munkres 1957.
 */

import { crossTable } from './agreement.ts';

export interface ZonePair {
  readonly from: number;
  readonly to: number;
  readonly vines: number;
}

/** The pairs that share vines, the largest first. */
export function pairZones(first: ArrayLike<number>, second: ArrayLike<number>): ZonePair[] {
  const { counts, rows, columns } = crossTable(first, second);
  const size = Math.max(rows, columns) - 1;
  const shared = (from: number, to: number) => (from < rows && to < columns ? counts[from * columns + to]! : 0);
  return assign(size, (from, to) => -shared(from, to))
    .flatMap((to, at) => (shared(at + 1, to) > 0 ? [{ from: at + 1, to, vines: shared(at + 1, to) }] : []))
    .sort((a, b) => b.vines - a.vines || a.from - b.from);
}

/** The column, from 1, that each row, from 1, is given so that the sum of costs is least. */
function assign(size: number, cost: (row: number, column: number) => number): number[] {
  const [ofRow, ofColumn] = [new Float64Array(size + 1), new Float64Array(size + 1)];
  const rowOf = new Int32Array(size + 1);
  for (let row = 1; row <= size; row++) augment(row, { size, cost, ofRow, ofColumn, rowOf });
  const columnOf = new Array<number>(size).fill(0);
  for (let column = 1; column <= size; column++) columnOf[rowOf[column]! - 1] = column;
  return columnOf;
}

interface Assignment {
  readonly size: number;
  readonly cost: (row: number, column: number) => number;
  readonly ofRow: Float64Array;
  readonly ofColumn: Float64Array;
  /** Row given to each column, 0 where none yet. */
  readonly rowOf: Int32Array;
}

/** Gives one more row its column along the cheapest chain of exchanges. */
function augment(added: number, { size, cost, ofRow, ofColumn, rowOf }: Assignment): void {
  const least = new Float64Array(size + 1).fill(Infinity);
  const before = new Int32Array(size + 1);
  const isDone = new Uint8Array(size + 1);
  let column = 0;
  rowOf[0] = added;
  while (rowOf[column] !== 0) {
    isDone[column] = 1;
    const row = rowOf[column]!;
    let [next, step] = [0, Infinity];
    for (let other = 1; other <= size; other++) {
      if (isDone[other] === 1) continue;
      const reduced = cost(row, other) - ofRow[row]! - ofColumn[other]!;
      if (reduced < least[other]!) [least[other], before[other]] = [reduced, column];
      if (least[other]! < step) [step, next] = [least[other]!, other];
    }
    for (let other = 0; other <= size; other++) {
      if (isDone[other] === 1) {
        ofRow[rowOf[other]!] = ofRow[rowOf[other]!]! + step;
        ofColumn[other] = ofColumn[other]! - step;
      } else least[other] = least[other]! - step;
    }
    column = next;
  }
  while (column !== 0) {
    const earlier = before[column]!;
    rowOf[column] = rowOf[earlier]!;
    column = earlier;
  }
}

/** Vines that are not in a zone paired with their own. vinesApart([1, 1, 2, 2], [2, 2, 1, 2]) is 1. */
export function vinesApart(first: ArrayLike<number>, second: ArrayLike<number>): number {
  return first.length - pairZones(first, second).reduce((sum, { vines }) => sum + vines, 0);
}

/** Whether a vine leaves its zone, when a zone that only got another number counts as the same; 0 is no zone. */
export function leavesZone(first: ArrayLike<number>, second: ArrayLike<number>): (vine: number) => boolean {
  const partner = new Map(pairZones(first, second).map(({ from, to }) => [from, to]));
  return (vine) => (first[vine]! === 0 ? second[vine]! !== 0 : partner.get(first[vine]!) !== second[vine]!);
}
