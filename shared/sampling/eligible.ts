import type { VineTable } from '../geo/vines.ts';

/**
 * Vines that may be drawn. Edge rows and row ends grow differently and are left out by common practice; missing,
 * replanted and off-type vines always are. When too few are left the rules are relaxed one after the other, and the
 * answer says which: vines near a zone border, one more vine at each end, edge rows, all ends.
 */
export type Relaxation = 'zoneBorder' | 'endVines' | 'edgeRows' | 'allEnds';

export interface EligibleRule {
  /** Rows left out on either side of the block. */
  readonly edgeRows: number;
  /** Vines left out at both ends of each piece of a row. */
  readonly endVines: number;
}

const USUAL_RULE: EligibleRule = { edgeRows: 1, endVines: 2 };

export interface EligibleInput {
  readonly table: VineTable;
  /** Vines of the zone in question, ascending. */
  readonly candidates: readonly number[];
  /** Not 0 for a vine that can never be a target. */
  readonly unusable?: ArrayLike<number>;
  /** Not 0 for a vine too near the border of its zone. */
  readonly nearBorder?: ArrayLike<number>;
  readonly rule?: Partial<EligibleRule>;
}

export interface Eligible {
  /** Ascending indexes into the table. */
  readonly vines: readonly number[];
  /** What had to be given up, in order. */
  readonly relaxed: readonly Relaxation[];
}

/** The eligible vines under the strictest rule that leaves at least `needed`. */
export function eligibleVines(input: EligibleInput, needed: number): Eligible {
  const fromEnd = placesFromEnds(input.table);
  const usable = input.candidates.filter((vine) => (input.unusable?.[vine] ?? 0) === 0);
  const steps = relaxations(input);
  let relaxed: Relaxation[] = [];
  for (const step of steps) {
    if (step.gives !== null) relaxed = [...relaxed, step.gives];
    const vines = usable.filter((vine) => fromEnd[vine]! >= step.endVines && isAllowed(input, step, vine));
    if (vines.length >= needed || step === steps.at(-1)) return { vines, relaxed };
  }
  throw new Error('relaxations always end with a last step');
}

interface Step {
  readonly gives: Relaxation | null;
  readonly border: boolean;
  readonly edgeRows: number;
  readonly endVines: number;
}

function relaxations({ nearBorder, rule }: EligibleInput): Step[] {
  const { edgeRows, endVines } = { ...USUAL_RULE, ...rule };
  const fewerEnds = Math.min(1, endVines);
  const steps: Step[] = [{ gives: null, border: nearBorder !== undefined, edgeRows, endVines }];
  if (nearBorder !== undefined) steps.push({ gives: 'zoneBorder', border: false, edgeRows, endVines });
  if (endVines > 1) steps.push({ gives: 'endVines', border: false, edgeRows, endVines: fewerEnds });
  if (edgeRows > 0) steps.push({ gives: 'edgeRows', border: false, edgeRows: 0, endVines: fewerEnds });
  if (endVines > 0) steps.push({ gives: 'allEnds', border: false, edgeRows: 0, endVines: 0 });
  return steps;
}

function isAllowed({ table, nearBorder }: EligibleInput, step: Step, vine: number): boolean {
  if (step.border && (nearBorder?.[vine] ?? 0) !== 0) return false;
  const row = table.row[vine]!;
  const lastRow = table.rowStart.length - 2;
  return row >= step.edgeRows && row <= lastRow - step.edgeRows;
}

const knownPlaces = new WeakMap<VineTable, Int32Array>();

/** How many vines stand between each vine and the nearer end of its piece; every zone of a block asks for the same. */
function placesFromEnds(table: VineTable): Int32Array {
  const known = knownPlaces.get(table);
  if (known) return known;
  const places = new Int32Array(table.count);
  for (let piece = 0; piece + 1 < table.pieceStart.length; piece++) {
    const from = table.pieceStart[piece]!;
    const last = table.pieceStart[piece + 1]! - 1;
    for (let vine = from; vine <= last; vine++) places[vine] = Math.min(vine - from, last - vine);
  }
  knownPlaces.set(table, places);
  return places;
}
