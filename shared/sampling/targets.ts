import { seededRandom, shuffled } from '../analysis/random.ts';
import type { VineTable } from '../geo/vines.ts';
import { placeCount, sampleSpread, type Spread } from './balance.ts';
import { type EligibleRule, eligibleVines, type Relaxation } from './eligible.ts';
import type { Units } from './pivotal.ts';
import { reserveVines } from './reserve.ts';
import { ceilGuarded } from './sampleSize.ts';
import { type DrawMethod, drawMethods } from './targetsMethods.ts';

/**
 * Target vines of a plan: a seeded probability sample in each zone, every eligible vine with the same chance, spread
 * over the zone, in random order (so that a round may stop early), with a reserve for each.
 * A zone's draw depends on the seed and its own vines only: changing the count of one zone leaves the others as they were.
 */
export interface DrawRequest {
  readonly table: VineTable;
  /** Zone of each vine, 0 for none. */
  readonly zoneOfVine: ArrayLike<number>;
  readonly wanted: readonly { readonly zone: number; readonly count: number }[];
  readonly seed: number;
  /** Not 0 for vines never drawn: missing, replanted, off-type, or already in the plan. */
  readonly unusable?: ArrayLike<number>;
  /** Not 0 for vines too near a zone border (`vinesNearBorder`); leave out to draw up to the border. */
  readonly nearBorder?: ArrayLike<number>;
  readonly rule?: Partial<EligibleRule>;
  /** Local pivotal by default; systematic spreads better on regular blocks but can fall in step with them. */
  readonly method?: DrawMethod;
  /** Targets nearer than this are one place; default 10 m (judgement). */
  readonly placeApartM?: number;
  /** Fewer places than this are reported; default 2. The draw itself is never repeated, which would bend the chances. */
  readonly wantedPlaces?: number;
  /** Share of each zone's targets, in the order of the draw, that get a reserve; all by default. */
  readonly reserveShare?: number;
}

export interface Target {
  /** Index into the vine table. */
  readonly vine: number;
  readonly rowIndex: number;
  readonly ordinal: number;
  /** 1, 2, 3 ... in random order. */
  readonly drawOrder: number;
  /** Index into the vine table, or null when the zone has no vine left. */
  readonly reserve: number | null;
}

export type DrawWarning =
  | { readonly code: 'tooFewVines'; readonly wanted: number; readonly drawn: number }
  | { readonly code: 'fewPlaces'; readonly places: number; readonly wanted: number };

export interface ZoneDraw extends Spread {
  readonly zone: number;
  readonly eligibleCount: number;
  /** Rules given up to find enough vines, in order. */
  readonly relaxed: readonly Relaxation[];
  readonly targets: readonly Target[];
  readonly places: number;
  readonly warnings: readonly DrawWarning[];
}

export function drawTargets(request: DrawRequest): ZoneDraw[] {
  const members = new Map<number, number[]>();
  for (let vine = 0; vine < request.table.count; vine++) {
    const zone = request.zoneOfVine[vine]!;
    const list = members.get(zone);
    if (list === undefined) members.set(zone, [vine]);
    else list.push(vine);
  }
  return request.wanted.map(({ zone, count }) => drawZone(request, { zone, count, candidates: members.get(zone) ?? [] }));
}

function drawZone(request: DrawRequest, { zone, count, candidates }: { zone: number; count: number; candidates: readonly number[] }): ZoneDraw {
  const { table, placeApartM = 10, wantedPlaces = 2, reserveShare = 1 } = request;
  const { vines, relaxed } = eligibleVines({ ...request, candidates }, count);
  const random = seededRandom(request.seed ^ Math.imul(zone, 0x9e3779b1));
  const drawn = Math.min(count, vines.length);
  const units = unitsOf(table, vines, drawn);
  const draw = drawMethods[request.method ?? 'pivotal'];
  const sample = drawn === vines.length ? [...vines.keys()] : draw({ table, vines, units, count: drawn }, random);
  const order = shuffled(sample, random);
  const targetVines = order.map((unit) => vines[unit]!);
  const reserves = reserveVines(table, vines, targetVines).map((reserve, i) => (i < ceilGuarded(reserveShare * targetVines.length) ? reserve : null));
  const places = placeCount({ x: table.x, y: table.y }, targetVines, placeApartM);
  return {
    zone, eligibleCount: vines.length, relaxed, places,
    targets: targetVines.map((vine, i) => ({
      vine, rowIndex: table.row[vine]!, ordinal: table.ordinal[vine]!, drawOrder: i + 1, reserve: reserves[i]!,
    })),
    ...(drawn === 0 ? { balance: Number.NaN, meanSquaredDistanceM2: Number.NaN } : spreadInMetres(units, order)),
    warnings: warningsOf({ wanted: count, drawn, places, wantedPlaces: Math.min(wantedPlaces, drawn) }),
  };
}

const UNITS_PER_M = 1e4;

/** Positions in whole tenths of a millimetre: equal distances then stay equal on every machine, and so does the draw. */
function unitsOf(table: VineTable, vines: readonly number[], drawn: number): Units {
  const place = (values: Float64Array): Float64Array => {
    const least = vines.reduce((low, vine) => Math.min(low, values[vine]!), Infinity);
    return Float64Array.from(vines, (vine) => Math.round((values[vine]! - least) * UNITS_PER_M));
  };
  return { x: place(table.x), y: place(table.y), p: new Float64Array(vines.length).fill(drawn / vines.length) };
}

function spreadInMetres(units: Units, sample: readonly number[]): Spread {
  const spread = sampleSpread(units, sample);
  return { ...spread, meanSquaredDistanceM2: spread.meanSquaredDistanceM2 / UNITS_PER_M ** 2 };
}

function warningsOf({ wanted, drawn, places, wantedPlaces }: Record<'wanted' | 'drawn' | 'places' | 'wantedPlaces', number>): DrawWarning[] {
  const warnings: DrawWarning[] = [];
  if (drawn < wanted) warnings.push({ code: 'tooFewVines', wanted, drawn });
  if (places < wantedPlaces) warnings.push({ code: 'fewPlaces', places, wanted: wantedPlaces });
  return warnings;
}
