/**
 * What is doubtful about a layer on a block, before anybody zones with it. In: its cells and what is known of its source.
 * Out: findings, gravest first. Limits are common practice or judgement, named beside each.
 */
import { layerType } from '../catalog/layerTypes.ts';
import type { Cells, Grid } from './grid.ts';
import type { CanopyFigures } from './canopyCells.ts';
import type { LayerStats } from './layerStats.ts';
import { sensorStripes } from './layerStripes.ts';
import { sceneMarks, type BandMeans } from './sceneFitness.ts';

/** red keeps a layer out of zoning, amber goes with it wherever it is shown, note is for the record. */
export interface LayerFinding {
  readonly code: string;
  readonly severity: 'red' | 'amber' | 'note';
  readonly params: Readonly<Record<string, string | number>>;
}

/** A finding with its place: 1 for the cells it is about; without cells it is about the whole block. */
export interface PlacedFinding extends LayerFinding {
  readonly cells?: Uint8Array;
}

export interface LayerFacts {
  readonly type: string;
  /** What the values are: an index such as ndvi, or null. */
  readonly index: string | null;
  readonly measuredOn: string | null;
  readonly pixelSizeM: number | null;
  readonly rowSpacingM: number;
  readonly alleys: string | null;
  readonly steelTrellis: string | null;
  readonly rowBearingDeg?: number;
  /** Growth stage of the vines on the day of a vigour picture. */
  readonly growthStage?: string | null;
  /** Means of the bands that an index was made of here; null where the file held the index. */
  readonly bandMeans?: BandMeans | null;
  /** Values of canopy alone: how it was told from the alleys; null where all pixels count. */
  readonly canopy?: CanopyFigures | null;
  /** Unit of heights as told, as the file says it (m or ft; null where it does not), and whether its grid is in feet; of elevations alone. */
  readonly heightUnit?: string | null;
  readonly heightUnitInFile?: string | null;
  readonly gridInFeet?: boolean;
  /** Length of the file's outline against that of a block where it is that of a mixed-up unit of length. */
  readonly scaleTimes?: number | null;
  /** Points inside the block that the cells come from; null for pictures and shapes. */
  readonly pointCount: number | null;
}

export interface Judged {
  readonly grid: Grid;
  readonly cells: Cells;
  readonly stats: LayerStats;
  readonly facts: LayerFacts;
}

/** Below the first a layer cannot carry zones (judgement); between the two the gap should be looked at. */
const enoughCoverage = 0.9;
const fullCoverage = 0.98;
/** Share of cells at one end value from which it looks cut off there (judgement). */
const saturatedShare = 0.05;
/** About a hundred points make a stable variogram (Webster & Oliver); thirty at least for a picture of a block (judgement). */
const fewPoints = 30;

const ranges: Record<string, readonly [number, number]> = { ndvi: [-1, 1], gndvi: [-1, 1], ndre: [-1, 1], savi: [-1.5, 1.5], osavi: [-1.2, 1.2], msavi2: [-1, 1], ratio: [0, 60] };
/** Layers whose pattern changes with the season: their day matters. */
const dated = new Set(['vigour', 'conductivity', 'yield']);

/** Otsu's measure below this, or a valley between the humps fuller than the second: one hump of pixels, not canopy and alleys (judgement). */
const clearlyApart = 0.6;
const clearValley = 0.8;
/** Strips along rows whose index lies less than this above the alleys miss the canopy (judgement). */
const stripsAbove = 0.5;
/** A block steeper than this on average is rare even on terraces' slopes; the highest vineyards lie a little above 3,000 m (judgement). */
const steepSlopeDeg = 25;
const highestVineyardM = 3400;
const footM = 0.3048;
/** Pixels from this size on come from above the haze (judgement). */
const aboveHazeM = 1.5;
/** Cloud or shadow over more of the block than this leaves too little ground to zone on. */
const mostHidden = 0.1;
/** Rows and cells of nearly one width beat in stripes narrower than this; a camera's swath is wider (judgement). */
const widestBeatM = 12;
/** Bearings this close to the rows' count as along them. */
const alongRowsDeg = 7.5;

/** Whether a layer of this type without a day is doubtful. */
export function needsDay(type: string): boolean {
  return dated.has(type);
}

type Check = (judged: Judged) => PlacedFinding | readonly PlacedFinding[] | null;

const checks: readonly Check[] = [
  ({ facts }) => (typeof facts.scaleTimes === 'number' ? { code: 'scale', severity: 'red', params: { times: facts.scaleTimes } } : null),
  (judged) => (judged.stats.coverage >= enoughCoverage ? null : { code: 'partial', severity: 'red', params: { percent: Math.min(enoughCoverage * 100 - 1, Math.round(judged.stats.coverage * 100)), needed: enoughCoverage * 100 }, cells: emptyCells(judged) }),
  (judged) => impossible(judged),
  ({ stats }) => (stats.n > 1 && isConstant(stats) ? { code: 'constant', severity: 'red', params: { value: stats.min! } } : null),
  (judged) => hidden(judged),
  (judged) => (judged.stats.coverage >= enoughCoverage && judged.stats.coverage < fullCoverage ? { code: 'gaps', severity: 'amber', params: { percent: Math.floor(judged.stats.coverage * 1000) / 10 }, cells: emptyCells(judged) } : null),
  (judged) => saturated(judged),
  (judged) => striped(judged),
  ({ facts }) => (dated.has(facts.type) && facts.measuredOn === null ? { code: 'noDate', severity: 'amber', params: {} } : null),
  ({ facts }) => growth(facts),
  ({ facts }) => (facts.type === 'vigour' && facts.pixelSizeM !== null && facts.pixelSizeM > facts.rowSpacingM / 4 ? { code: 'alleyMixed', severity: 'amber', params: { pixelM: facts.pixelSizeM, spacingM: facts.rowSpacingM } } : null),
  // Strips along the rows leave the alleys out, whatever grows there.
  ({ facts }) => (facts.type === 'vigour' && facts.alleys === 'green' && facts.canopy?.threshold !== null ? { code: 'greenAlleys', severity: 'amber', params: {} } : null),
  ({ facts }) => canopy(facts),
  (judged) => heights(judged),
  ({ facts }) => (facts.type === 'vigour' && facts.pixelSizeM !== null && facts.bandMeans === null ? { code: 'cloudUnseen', severity: 'note', params: {} } : null),
  ({ facts }) => (facts.type === 'vigour' && facts.pixelSizeM !== null && facts.pixelSizeM >= aboveHazeM && facts.bandMeans ? { code: 'hazeUnseen', severity: 'note', params: {} } : null),
  ({ facts }) => (facts.type === 'conductivity' && facts.steelTrellis === 'yes' ? { code: 'steelTrellis', severity: 'amber', params: {} } : null),
  ({ facts }) => (facts.type === 'conductivity' && facts.steelTrellis === 'unknown' ? { code: 'trellisUnknown', severity: 'note', params: {} } : null),
  ({ facts }) => (facts.pointCount !== null && facts.pointCount < fewPoints ? { code: 'fewPoints', severity: 'amber', params: { points: facts.pointCount, wanted: fewPoints } } : null),
  ({ facts, grid }) => (facts.pixelSizeM !== null && facts.pixelSizeM > 2 * grid.cellSizeM ? { code: 'coarsePixels', severity: 'note', params: { pixelM: facts.pixelSizeM, cellM: grid.cellSizeM } } : null),
];

const gravity = { red: 0, amber: 1, note: 2 } as const;

export function layerFindings(judged: Judged): PlacedFinding[] {
  const found = checks.flatMap((check) => check(judged) ?? []);
  return found.sort((a, b) => gravity[a.severity] - gravity[b.severity]);
}

/** Ground of the block without a value. */
function emptyCells({ grid, cells }: Judged): Uint8Array {
  return Uint8Array.from(cells, (value, cell) => (grid.share[cell]! > 0 && Number.isNaN(value) ? 1 : 0));
}

/** Cloud and shadow, where the bands tell. */
function hidden({ grid, facts }: Judged): PlacedFinding[] {
  const marks = facts.type === 'vigour' && facts.bandMeans ? sceneMarks(grid, facts.bandMeans) : null;
  if (marks === null) return [];
  const all = grid.share.reduce((sum, share) => sum + share, 0);
  return (['cloud', 'shadow'] as const).flatMap((code) => {
    const share = marks[code].reduce((sum, mark, cell) => sum + mark * grid.share[cell]!, 0) / all;
    return share === 0 ? [] : { code, severity: share > mostHidden ? 'red' : 'amber', params: { percent: Math.max(1, Math.round(share * 100)) }, cells: marks[code] } as const;
  });
}

/** Stripes of a sensor in a layer that votes; terrain and soil maps are structured by their making. */
function striped({ grid, cells, stats, facts }: Judged): PlacedFinding | null {
  if (!dated.has(facts.type) || stats.n < 2 || isConstant(stats)) return null;
  const stripes = sensorStripes(grid, cells, { showsRows: layerType(facts.type).showsRows });
  if (stripes === null) return null;
  const off = Math.abs(((stripes.bearingDeg - (facts.rowBearingDeg ?? NaN) + 270) % 180) - 90);
  const isBeat = layerType(facts.type).showsRows && stripes.widthM < widestBeatM;
  return {
    code: isBeat ? 'rowBeat' : off <= alongRowsDeg ? 'stripesAlongRows' : 'stripes',
    severity: 'amber',
    params: { bearing: stripes.bearingDeg, widthM: Math.round(stripes.widthM), percent: Math.round(stripes.share * 100) },
    cells: stripes.cells,
  };
}

/** A vigour picture describes the season when the canopy is full, from fruit set to veraison and ripeness (common practice). */
function growth({ type, growthStage }: LayerFacts): PlacedFinding | null {
  if (type !== 'vigour' || growthStage === undefined || growthStage === null) return null;
  if (growthStage === 'budburst' || growthStage === 'flowering') return { code: 'earlyCanopy', severity: 'amber', params: {} };
  if (growthStage === 'leafFall') return { code: 'leafFall', severity: 'amber', params: {} };
  return growthStage === 'unknown' ? { code: 'noStage', severity: 'note', params: {} } : null;
}

function canopy({ canopy: figures }: LayerFacts): PlacedFinding[] {
  if (figures === undefined || figures === null) return [];
  const percent = Math.round(figures.share * 100);
  const isByRows = figures.threshold === null;
  const isClear = figures.separability >= (isByRows ? stripsAbove : clearlyApart) && (figures.split?.valley ?? 0) <= clearValley;
  const told: PlacedFinding = { code: isByRows ? 'canopyByRows' : 'canopyOnly', severity: 'note', params: { percent, ...(isByRows ? {} : { value: figures.threshold! }) } };
  const kinds = figures.split?.kinds ?? 'two';
  if (isClear && kinds !== 'two') return [{ code: kinds === 'three' ? 'canopyOfThree' : 'canopyPatchy', severity: 'amber', params: {} }, told];
  return isClear ? [told] : [{ code: isByRows ? 'rowsMissCanopy' : 'canopyUnclear', severity: 'amber', params: {} }, told];
}

/** Heights in a unit that the file or the land contradicts: feet taken for metres make every slope 3.28 times too steep. */
function heights({ facts: { type, heightUnit, heightUnitInFile, gridInFeet }, stats }: Judged): PlacedFinding | null {
  if (typeof heightUnit !== 'string') return null;
  const isFeet = (unit: string) => unit !== 'm';
  if (typeof heightUnitInFile === 'string') {
    return isFeet(heightUnitInFile) === isFeet(heightUnit) ? null : { code: 'heightUnit', severity: 'amber', params: { file: heightUnitInFile, told: heightUnit } };
  }
  if (isFeet(heightUnit)) return null;
  if (type === 'slope' && stats.mean !== null && stats.mean > steepSlopeDeg) {
    return { code: 'steep', severity: 'amber', params: { slope: Math.round(stats.mean), inFeet: Math.round((Math.atan(Math.tan((stats.mean * Math.PI) / 180) * footM) * 180) / Math.PI) } };
  }
  if (type === 'elevation' && stats.max !== null && stats.max > highestVineyardM) return { code: 'high', severity: 'amber', params: { height: Math.round(stats.max), inFeet: Math.round(stats.max * footM) } };
  return gridInFeet === true ? { code: 'feetGrid', severity: 'note', params: {} } : null;
}

function isConstant(stats: LayerStats): boolean {
  return stats.max! - stats.min! <= 1e-6 * Math.max(1e-6, Math.abs(stats.max!));
}

/** Cells outside what this layer can hold at all. */
function impossible({ grid, cells, stats, facts }: Judged): PlacedFinding | null {
  const [min, max] = rangeOf(facts);
  if (stats.n === 0 || (stats.min! >= min && stats.max! <= max)) return null;
  const marked = Uint8Array.from(cells, (value, cell) => (grid.inside[cell] === 1 && (value < min || value > max) ? 1 : 0));
  const count = countOf(marked);
  return {
    code: 'impossible',
    severity: 'red',
    params: {
      count,
      percent: Math.ceil((100 * count) / stats.n),
      value: stats.min! < min ? stats.min! : stats.max!,
      ...(Number.isFinite(min) ? { min } : {}),
      ...(Number.isFinite(max) ? { max } : {}),
    },
    cells: marked,
  };
}

function rangeOf({ type, index }: LayerFacts): readonly [number, number] {
  if (index !== null && ranges[index]) return ranges[index];
  const row = layerType(type);
  // Digital numbers of no known index may have any size.
  return type === 'vigour' ? [-Infinity, Infinity] : [row.min ?? -Infinity, row.max ?? Infinity];
}

function saturated({ grid, cells, stats, facts }: Judged): PlacedFinding | null {
  // Only a picture is cut off at its end; flat ground has one slope for good reasons.
  if (facts.type !== 'vigour' || stats.n < 100 || isConstant(stats)) return null;
  const at = (end: number) => Uint8Array.from(cells, (value, cell) => (grid.inside[cell] === 1 && value === end ? 1 : 0));
  const [value, marked] = [stats.min!, stats.max!].map((end) => [end, at(end)] as const).reduce((most, each) => (countOf(each[1]) >= countOf(most[1]) ? each : most));
  const share = countOf(marked) / stats.n;
  return share < saturatedShare ? null : { code: 'saturated', severity: 'amber', params: { percent: Math.round(share * 100), value }, cells: marked };
}

function countOf(marks: Uint8Array): number {
  return marks.reduce((sum, mark) => sum + mark, 0);
}
