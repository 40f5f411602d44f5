/**
 * What is doubtful about a layer on a block, before anybody zones with it. In: its cells and what is known of its source.
 * Out: findings, gravest first. Limits are common practice or judgement, named beside each.
 */
import { layerType } from '../catalog/layerTypes.ts';
import type { Cells, Grid } from './grid.ts';
import type { LayerStats } from './layerStats.ts';

/** red keeps a layer out of zoning, amber goes with it wherever it is shown, note is for the record. */
export interface LayerFinding {
  readonly code: string;
  readonly severity: 'red' | 'amber' | 'note';
  readonly params: Readonly<Record<string, string | number>>;
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

type Check = (judged: Judged) => LayerFinding | null;

const checks: readonly Check[] = [
  ({ stats }) => (stats.coverage >= enoughCoverage ? null : { code: 'partial', severity: 'red', params: { percent: Math.floor(stats.coverage * 100), needed: enoughCoverage * 100 } }),
  (judged) => impossible(judged),
  ({ stats }) => (stats.n > 1 && isConstant(stats) ? { code: 'constant', severity: 'red', params: { value: stats.min! } } : null),
  ({ stats }) => (stats.coverage >= enoughCoverage && stats.coverage < fullCoverage ? { code: 'gaps', severity: 'amber', params: { percent: Math.floor(stats.coverage * 1000) / 10 } } : null),
  (judged) => saturated(judged),
  ({ facts }) => (dated.has(facts.type) && facts.measuredOn === null ? { code: 'noDate', severity: 'amber', params: {} } : null),
  ({ facts }) => (facts.type === 'vigour' && facts.pixelSizeM !== null && facts.pixelSizeM > facts.rowSpacingM / 4 ? { code: 'alleyMixed', severity: 'amber', params: { pixelM: facts.pixelSizeM, spacingM: facts.rowSpacingM } } : null),
  ({ facts }) => (facts.type === 'vigour' && facts.alleys === 'green' ? { code: 'greenAlleys', severity: 'amber', params: {} } : null),
  ({ facts }) => (facts.type === 'conductivity' && facts.steelTrellis === 'yes' ? { code: 'steelTrellis', severity: 'amber', params: {} } : null),
  ({ facts }) => (facts.type === 'conductivity' && facts.steelTrellis === 'unknown' ? { code: 'trellisUnknown', severity: 'note', params: {} } : null),
  ({ facts }) => (facts.pointCount !== null && facts.pointCount < fewPoints ? { code: 'fewPoints', severity: 'amber', params: { points: facts.pointCount, wanted: fewPoints } } : null),
  ({ facts, grid }) => (facts.pixelSizeM !== null && facts.pixelSizeM > 2 * grid.cellSizeM ? { code: 'coarsePixels', severity: 'note', params: { pixelM: facts.pixelSizeM, cellM: grid.cellSizeM } } : null),
];

const gravity = { red: 0, amber: 1, note: 2 } as const;

export function layerFindings(judged: Judged): LayerFinding[] {
  const found = checks.map((check) => check(judged)).filter((finding): finding is LayerFinding => finding !== null);
  return found.sort((a, b) => gravity[a.severity] - gravity[b.severity]);
}

function isConstant(stats: LayerStats): boolean {
  return stats.max! - stats.min! <= 1e-6 * Math.max(1e-6, Math.abs(stats.max!));
}

/** Cells outside what this layer can hold at all. */
function impossible({ grid, cells, stats, facts }: Judged): LayerFinding | null {
  const [min, max] = rangeOf(facts);
  if (stats.n === 0 || (stats.min! >= min && stats.max! <= max)) return null;
  let count = 0;
  for (let cell = 0; cell < cells.length; cell++) if (grid.inside[cell] === 1 && (cells[cell]! < min || cells[cell]! > max)) count += 1;
  return { code: 'impossible', severity: 'red', params: { count, percent: Math.ceil((100 * count) / stats.n), value: stats.min! < min ? stats.min! : stats.max!, ...(Number.isFinite(min) ? { min } : {}), ...(Number.isFinite(max) ? { max } : {}) } };
}

function rangeOf({ type, index }: LayerFacts): readonly [number, number] {
  if (index !== null && ranges[index]) return ranges[index];
  const row = layerType(type);
  // Digital numbers of no known index may have any size.
  return type === 'vigour' ? [-Infinity, Infinity] : [row.min ?? -Infinity, row.max ?? Infinity];
}

function saturated({ grid, cells, stats, facts }: Judged): LayerFinding | null {
  // Only a picture is cut off at its end; flat ground has one slope for good reasons.
  if (facts.type !== 'vigour' || stats.n < 100 || isConstant(stats)) return null;
  let [low, high] = [0, 0];
  for (let cell = 0; cell < cells.length; cell++) {
    if (grid.inside[cell] !== 1) continue;
    if (cells[cell] === stats.min) low += 1;
    if (cells[cell] === stats.max) high += 1;
  }
  const share = Math.max(low, high) / stats.n;
  return share < saturatedShare ? null : { code: 'saturated', severity: 'amber', params: { percent: Math.round(share * 100), value: high >= low ? stats.max! : stats.min! } };
}
