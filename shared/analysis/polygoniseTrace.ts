/**
 * Borders between labels as a network: each stretch of border between two places where three or more zones meet is traced
 * once, so both its zones share it. In: extended labels. Out: borders in half-cell units (u east, v south, 2 = one cell).
 * A border runs through the middles of the cell edges it follows, which turns stairs into straight lines; where it meets
 * other borders it passes through the cell corner. Cost: cells plus border length.
 *
 *   Where two zones meet cross-wise at a corner (a b / b a) the lower label stays connected:
 *   1 2        1 ╲ 2
 *   2 1   →    2 ╲ 1   two borders pass, and no ring touches itself.
 */
import type { ExtendedLabels } from './polygoniseExtend.ts';

export interface Border {
  /** Labels to the left and right when walking along the points with north up. */
  readonly left: number;
  readonly right: number;
  /** Pairs u, v; a loop does not repeat its first point. */
  readonly points: Int32Array;
  readonly isLoop: boolean;
}

/** Directions of the edges at a corner, clockwise from east, as v points south. */
const EAST = 0;
const SOUTH = 1;
const WEST = 2;
const NORTH = 3;
const STEP_U = [1, 0, -1, 0] as const;
const STEP_V = [0, 1, 0, -1] as const;

export function traceBorders({ labels, cols, rows }: ExtendedLabels): Border[] {
  const tracer = new Tracer(labels, cols, rows);
  const borders: Border[] = [];
  tracer.eachStart((isNode, corner, direction) => borders.push(tracer.follow(corner, direction, isNode)));
  return borders;
}

/** Corner (col, row) is number row · (cols + 1) + col; `open` holds the border edges at each corner not yet traced, as bits. */
class Tracer {
  private readonly labels: Uint8Array;
  private readonly cols: number;
  private readonly width: number;
  private readonly edges: Uint8Array;
  private readonly open: Uint8Array;

  constructor(labels: Uint8Array, cols: number, rows: number) {
    this.labels = labels;
    this.cols = cols;
    this.width = cols + 1;
    this.edges = new Uint8Array(this.width * (rows + 1));
    for (let row = 1; row < rows; row++) {
      for (let col = 1; col < cols; col++) {
        const southEast = row * cols + col;
        const se = labels[southEast]!;
        const sw = labels[southEast - 1]!;
        const ne = labels[southEast - cols]!;
        const nw = labels[southEast - cols - 1]!;
        if (se === sw && ne === nw && se === ne) continue;
        const isBorder = (a: number, b: number) => (a !== b && a > 0 && b > 0 ? 1 : 0);
        this.edges[row * this.width + col] = isBorder(ne, se) | (isBorder(sw, se) << SOUTH) | (isBorder(nw, sw) << WEST) | (isBorder(nw, ne) << NORTH);
      }
    }
    this.open = new Uint8Array(this.edges);
  }

  /** Every border once: first those that begin where borders meet or end, then the loops that are left. */
  eachStart(visit: (isNode: boolean, corner: number, direction: number) => void): void {
    for (const wantNodes of [true, false]) {
      for (let corner = 0; corner < this.open.length; corner++) {
        if (this.open[corner] === 0 || (wantNodes && !this.isNode(corner))) continue;
        for (let direction = EAST; direction <= NORTH; direction++) if ((this.open[corner]! >> direction) & 1) visit(wantNodes, corner, direction);
      }
    }
  }

  follow(start: number, firstDirection: number, fromNode: boolean): Border {
    const points: number[] = [];
    const at = (corner: number, direction: number, half: number) => {
      points.push(2 * (corner % this.width) + half * STEP_U[direction]!, 2 * Math.floor(corner / this.width) + half * STEP_V[direction]!);
    };
    if (fromNode) at(start, EAST, 0);
    let corner = start;
    let direction = firstDirection;
    do {
      at(corner, direction, 1);
      this.open[corner]! &= ~(1 << direction);
      corner += STEP_U[direction]! + STEP_V[direction]! * this.width;
      this.open[corner]! &= ~(1 << ((direction + 2) % 4));
      if (fromNode && this.isNode(corner)) break;
      direction = this.onward(corner, direction);
    } while (fromNode || corner !== start || direction !== firstDirection);
    if (fromNode) at(corner, EAST, 0);
    const [left, right] = this.sides(start, firstDirection);
    return { left, right, points: Int32Array.from(points), isLoop: !fromNode };
  }

  /** Labels around a corner: north-west, north-east, south-west, south-east. */
  private around(corner: number): readonly [number, number, number, number] {
    const cell = Math.floor(corner / this.width) * this.cols + (corner % this.width);
    return [this.labels[cell - this.cols - 1]!, this.labels[cell - this.cols]!, this.labels[cell - 1]!, this.labels[cell]!];
  }

  /** A border passes a corner with two of its edges, or with four where a zone continues cross-wise; all others are nodes. */
  private isNode(corner: number): boolean {
    const [nw, ne, sw, se] = this.around(corner);
    if (nw === 0 || ne === 0 || sw === 0 || se === 0) return true;
    const edges = this.edges[corner]!;
    const degree = (edges & 1) + ((edges >> SOUTH) & 1) + ((edges >> WEST) & 1) + ((edges >> NORTH) & 1);
    return degree === 3 || (degree === 4 && nw !== se && ne !== sw);
  }

  /** Direction in which a border leaves a corner that it reached in `direction`. */
  private onward(corner: number, direction: number): number {
    const back = (direction + 2) % 4;
    const edges = this.edges[corner]!;
    if (edges !== 15) return Math.log2(edges & ~(1 << back));
    const [nw, ne, sw, se] = this.around(corner);
    const joinsNorthWest = nw === se && (ne !== sw || nw < ne);
    // North-west with south-east joined: the border turns around north-east (N with E) or around south-west (S with W).
    return joinsNorthWest ? 3 - back : back ^ 1;
  }

  private sides(corner: number, direction: number): readonly [left: number, right: number] {
    const [nw, ne, sw, se] = this.around(corner);
    if (direction === EAST) return [ne, se];
    if (direction === SOUTH) return [se, sw];
    return direction === WEST ? [sw, nw] : [nw, ne];
  }
}
