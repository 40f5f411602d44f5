import { seededRandom } from '../analysis/random.ts';
import type { WalkExpected } from '../contracts/planBasis.ts';
import type { PaceChoices } from '../contracts/planChoices.ts';
import type { XY } from '../geo/coordinates.ts';
import type { RowsXY } from '../geo/rowsLayout.ts';
import type { VineTable } from '../geo/vines.ts';
import { walkBlock } from './walkBlock.ts';
import { metresBySlope, USUAL_PACE, USUAL_SLOPE_SPEEDS, type PacedGround } from './walkTime.ts';

/**
 * What the walk will take before its vines are drawn: exact walks past trial vines of this block, for a few counts, and
 * between them a power of the count (a walk past few vines grows about as its square root, as the
 * shortest way through points of a plane does: Beardwood, Halton & Hammersley 1959; past very many hardly at all).
 * Own rule; against walks that were then laid: tests/core/walkEstimate.test.ts.
 */
export interface TrialGround {
  readonly rows: RowsXY;
  readonly table: VineTable;
  /** Vines that may be drawn, row by row. */
  readonly vines: readonly number[];
  readonly gateXY: XY;
  readonly elevationM?: PacedGround['elevationM'];
}

const TRIAL_COUNTS = [6, 25, 90, 250];
const TRIAL_SEED = 20;

/** Seconds at the usual pace on level ground and on the slopes there are, by number of vines. */
export function trialWalks({ rows, table, vines, gateXY, elevationM }: TrialGround): WalkExpected[] {
  const random = seededRandom(TRIAL_SEED);
  const counts = [...new Set(TRIAL_COUNTS.map((count) => Math.min(count, vines.length)))].filter((count) => count > 0);
  return counts.map((count) => {
    // One vine by lot from each of equal stretches of the list: as spread as a draw, at no cost.
    const trial = Array.from({ length: count }, (_, i) => vines[Math.floor(((i + random()) * vines.length) / count)]!);
    const targets = trial.map((vine) => ({ rowIndex: table.row[vine]!, ordinal: table.ordinal[vine]! }));
    const { walk, pathXY } = walkBlock({ rows, vines: targets, gateXY, ground: { ...(elevationM ? { elevationM } : {}) } });
    return { vines: count, levelS: walk.lengthM / USUAL_PACE[0]!.speedMS, slopedS: walk.cost, slopesM: slopesOf(pathXY, elevationM) };
  });
}

function slopesOf(pathXY: readonly XY[], elevationM: PacedGround['elevationM']): number[] {
  const metres = USUAL_PACE.map(() => 0);
  pathXY.slice(1).forEach((toXY, i) => {
    const fromXY = pathXY[i]!;
    metresBySlope({ fromXY, toXY, lengthM: Math.hypot(toXY[0] - fromXY[0], toXY[1] - fromXY[1]) }, elevationM).forEach((part, slope) => (metres[slope]! += part));
  });
  return metres;
}

/** Share of the way in each class of slopes, of the longest walk tried; null where that is not known. */
export function shareBySlope(walks: readonly WalkExpected[]): number[] | null {
  const metres = walks.at(-1)?.slopesM;
  const sum = metres?.reduce((total, part) => total + part, 0) ?? 0;
  return metres && sum > 0 ? metres.map((part) => part / sum) : null;
}

/** Seconds on foot past so many vines at the chosen pace; 0 where there is nothing to go by. */
export function walkSeconds(walks: readonly WalkExpected[], vines: number, pace: PaceChoices): number {
  if (walks.length === 0 || vines === 0) return 0;
  return secondsBetween(walks.map((walk) => ({ vines: walk.vines, seconds: atPace(walk, pace) })), vines);
}

/** The trial walks brought into line with a walk that was laid, so that its count gives exactly its time. */
export function walksAsLaid(walks: readonly WalkExpected[], laid: { readonly vines: number; readonly walkingS: number }, pace: PaceChoices): WalkExpected[] {
  const expected = walkSeconds(walks, laid.vines, pace);
  if (!(expected > 0)) return [...walks];
  const factor = laid.walkingS / expected;
  return walks.map((walk) => ({ ...walk, levelS: walk.levelS * factor, slopedS: walk.slopedS * factor }));
}

/** The way stays the one that was tried, also where other speeds on slopes would make another a little quicker. */
function atPace({ levelS, slopedS, slopesM }: WalkExpected, { kmPerHour, onSlopes, slopeSpeeds }: PaceChoices): number {
  const onFoot = onSlopes ? slopedS * (slopeSpeeds && slopesM ? timeAt(slopesM, slopeSpeeds) / timeAt(slopesM, USUAL_SLOPE_SPEEDS) : 1) : levelS;
  return (onFoot * USUAL_PACE[0]!.speedMS) / (kmPerHour / 3.6);
}

function timeAt(slopesM: readonly number[], speeds: readonly number[]): number {
  return slopesM.reduce((sum, metres, i) => sum + metres / (i === 0 ? 1 : speeds[i - 1]!), 0);
}

function secondsBetween(points: readonly { readonly vines: number; readonly seconds: number }[], vines: number): number {
  if (points.length === 1) return points[0]!.seconds * Math.sqrt(vines / points[0]!.vines);
  const above = points.findIndex((point) => point.vines >= vines);
  const to = points[Math.max(1, above < 0 ? points.length - 1 : above)]!;
  const from = points[points.indexOf(to) - 1]!;
  const power = Math.log(to.seconds / from.seconds) / Math.log(to.vines / from.vines);
  return from.seconds * (vines / from.vines) ** Math.max(0, power);
}
