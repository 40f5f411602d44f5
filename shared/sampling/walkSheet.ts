import type { Walk, WalkStep } from './walk.ts';
import type { Alley } from './walkLayout.ts';

/** A target as the sheet needs it. */
export interface SheetTarget {
  readonly rowIndex: number;
  readonly ordinal: number;
  readonly zone?: number;
}

export interface SheetInput {
  readonly walk: Walk;
  readonly alleys: readonly Alley[];
  /** Named by the stops of the walk. */
  readonly targets: readonly SheetTarget[];
  /** Ordinals and places along the rows of a row's vines, in order (`vinesAlong`). */
  readonly vinesOfRow: (rowIndex: number) => { readonly firstOrdinal: number; readonly alongT: readonly number[] };
}

/**
 * One line of the crew sheet, in walking order. No words: row and vine labels, post colours and sentences are put in by
 * whoever prints or shows it.
 */
export interface SheetLine {
  /** Walk number, also on the bag; never moves up when a bag stays unused. */
  readonly number: number;
  readonly target: number;
  readonly rowIndex: number;
  readonly ordinal: number;
  readonly alley: number;
  /** Where the alley was entered for this pass: its low-t end, its high-t end, through a gap, or already inside. */
  readonly enterBy: 'start' | 'end' | 'gap' | 'inside';
  /** Direction of walking along the row. */
  readonly heading: 'toEnd' | 'toStart';
  /** Vines of the target's row from there, or from the last vine worked in this pass, the target counted: 0 is beside you. */
  readonly ahead: number;
  readonly aheadFrom: 'entry' | 'lastVine';
  /** The first target of its zone on this walk: the zone's composite bag is opened here. */
  readonly opensZone: boolean;
  readonly distanceM: number;
}

export function sheetLines({ walk, alleys, targets, vinesOfRow }: SheetInput): SheetLine[] {
  const zonesSeen = new Set<number>();
  return walk.stops.map((stop, i): SheetLine => {
    const target = targets[stop.target]!;
    const pass = passTo(walk.steps, stop.afterStep, alleys[stop.alley]!);
    const before = walk.stops[i - 1];
    const lastVine = before !== undefined && before.alley === stop.alley && before.afterStep >= pass.firstStep ? targets[before.target]! : null;
    const fromT = lastVine === null ? pass.fromT : vineAlong(vinesOfRow, lastVine);
    const isSameRow = lastVine !== null && lastVine.rowIndex === target.rowIndex;
    const opensZone = target.zone !== undefined && !zonesSeen.has(target.zone);
    if (target.zone !== undefined) zonesSeen.add(target.zone);
    return {
      number: i + 1, target: stop.target, rowIndex: target.rowIndex, ordinal: target.ordinal, alley: stop.alley,
      enterBy: pass.enterBy, heading: pass.heading,
      ahead: isSameRow ? Math.abs(target.ordinal - lastVine.ordinal) : vinesBetween(vinesOfRow(target.rowIndex).alongT, fromT, vineAlong(vinesOfRow, target)),
      aheadFrom: lastVine === null ? 'entry' : 'lastVine',
      opensZone, distanceM: stop.distanceM,
    };
  });
}

interface Pass {
  /** Index of the first step of the pass; that of the stop when the stop is made on entering. */
  readonly firstStep: number;
  readonly fromT: number;
  readonly enterBy: SheetLine['enterBy'];
  readonly heading: SheetLine['heading'];
}

/** The stretch along the alley in one direction that led to the stop, and the way by which the alley was entered. */
function passTo(steps: readonly WalkStep[], afterStep: number, alley: Alley): Pass {
  const isAlong = (step: WalkStep | undefined): step is WalkStep => step?.kind === 'alley';
  let firstStep = afterStep;
  while (isAlong(steps[firstStep - 1]) && (firstStep === afterStep || headingOf(steps[firstStep - 1]!) === headingOf(steps[firstStep]!))) firstStep -= 1;
  let entered = firstStep;
  while (isAlong(steps[entered - 1])) entered -= 1;
  const entryT = steps[entered]?.from.t ?? steps.at(-1)?.to.t ?? alley.bottomT;
  const moved = isAlong(steps[firstStep]) ? steps[firstStep] : undefined;
  return {
    firstStep,
    fromT: steps[firstStep]?.from.t ?? entryT,
    enterBy: entryT === alley.bottomT ? 'start' : entryT === alley.topT ? 'end' : entered > 0 ? 'gap' : 'inside',
    heading: moved === undefined ? (entryT === alley.topT ? 'toStart' : 'toEnd') : headingOf(moved),
  };
}

function headingOf({ from, to }: WalkStep): SheetLine['heading'] {
  return to.t >= from.t ? 'toEnd' : 'toStart';
}

function vineAlong(vinesOfRow: SheetInput['vinesOfRow'], { rowIndex, ordinal }: SheetTarget): number {
  const { firstOrdinal, alongT } = vinesOfRow(rowIndex);
  return alongT[ordinal - firstOrdinal]!;
}

/** Vines past `fromT` up to and with the one at `toT`, in either direction. */
function vinesBetween(alongT: readonly number[], fromT: number, toT: number): number {
  const forward = toT >= fromT;
  return alongT.filter((t) => (forward ? t > fromT + SAME_T && t <= toT + SAME_T : t < fromT - SAME_T && t >= toT - SAME_T)).length;
}

/** Vines nearer along the row than this stand beside each other. */
const SAME_T = 1e-6;
