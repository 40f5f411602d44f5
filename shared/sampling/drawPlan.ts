import type { XY } from '../geo/coordinates.ts';
import type { BlockRows } from '../geo/rows.ts';
import type { VineTable } from '../geo/vines.ts';
import type { EligibleRule } from './eligible.ts';
import { sideFor } from './rowSide.ts';
import { drawTargets, type ZoneDraw } from './targets.ts';
import { walkBlock } from './walkBlock.ts';
import { walkTime, type PacedGround } from './walkTime.ts';

/** Ground, counts and seed of a draw. */
export interface PlanDrawRequest {
  readonly rows: BlockRows;
  readonly table: VineTable;
  readonly zoneOfVine: ArrayLike<number>;
  /** Not 0 for vines that never are targets. */
  readonly unusable: ArrayLike<number>;
  /** Leave out to draw up to the borders of zones. */
  readonly nearBorder?: ArrayLike<number>;
  readonly rule?: Partial<EligibleRule>;
  readonly gateXY: XY;
  /** Vines of each zone, and samples of each measure there. */
  readonly wanted: readonly { readonly zone: number; readonly visits: number; readonly counts: readonly number[] }[];
  readonly measures: readonly string[];
  /** Side of the row that a measure asks for, by its code. */
  readonly sides?: Readonly<Record<string, 'low' | 'high'>>;
  /** Seconds at a vine of a zone for the measures taken there. */
  readonly secondsAt: (zone: number, measures: readonly string[]) => number;
  readonly reserveShare?: number;
  readonly seed: number;
  readonly ground?: PacedGround;
}

export interface PlannedTarget {
  readonly vine: number;
  readonly rowIndex: number;
  readonly ordinal: number;
  readonly zone: number;
  readonly drawOrder: number;
  readonly walkOrder: number;
  readonly reserve: number | null;
  readonly measures: readonly string[];
}

export interface PlanDraw {
  readonly zones: readonly ZoneDraw[];
  readonly targets: readonly PlannedTarget[];
  readonly lengthM: number;
  readonly walkingS: number;
  readonly serviceS: number;
  readonly isGroundAssumedOpen: boolean;
}

/**
 * Most vines that a plan draws: several days' work for one person. The exact walk past them grows with the third power of the
 * count: about two seconds here, and five seconds and a gigabyte at 860.
 */
export const MOST_TARGETS = 600;

/** Target vines of a plan in walking order, and what the walk from the gate and back takes. */
export function drawPlan(request: PlanDrawRequest): PlanDraw {
  const { rows, table, zoneOfVine, unusable, nearBorder, rule, gateXY, wanted, measures, sides = {}, secondsAt, seed, reserveShare } = request;
  const zones = drawTargets({ table, zoneOfVine, unusable, seed, ...(nearBorder ? { nearBorder } : {}), ...(rule ? { rule } : {}), ...(reserveShare === undefined ? {} : { reserveShare }), wanted: wanted.map(({ zone, visits }) => ({ zone, count: visits })) });
  const drawn = zones.flatMap((draw, i) =>
    draw.targets.map((target) => ({ ...target, zone: draw.zone, measures: measures.filter((_, j) => target.drawOrder <= wanted[i]!.counts[j]!) })));
  if (drawn.length === 0) return { zones, targets: [], lengthM: 0, walkingS: 0, serviceS: 0, isGroundAssumedOpen: false };
  const { walk, assumedOpen } = walkBlock({ rows, vines: drawn.map((vine) => ({ ...vine, side: sideFor(vine.measures, sides) })), gateXY, ...(request.ground ? { ground: request.ground } : {}) });
  const time = walkTime(walk, (target) => secondsAt(drawn[target]!.zone, drawn[target]!.measures));
  return {
    zones,
    targets: walk.stops.map(({ target }, i) => ({ ...drawn[target]!, walkOrder: i + 1 })),
    lengthM: walk.lengthM,
    walkingS: time.walkingS,
    serviceS: time.serviceS,
    isGroundAssumedOpen: assumedOpen,
  };
}
