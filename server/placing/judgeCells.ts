import { coverageOf, layerStats } from '../../shared/analysis/layerStats.ts';
import { layerFindings, type LayerFacts, type PlacedFinding } from '../../shared/analysis/layerFindings.ts';
import type { Cells, Grid } from '../../shared/analysis/grid.ts';
import { layerType } from '../../shared/catalog/layerTypes.ts';
import type { LayerFinding, LayerStatistics } from '../../shared/contracts/layers.ts';
import type { PlacedCells } from './placed.ts';

/** Cells of a layer with statistics and findings; ground outside the block is taken off. Null where the block has no value at all. */
export function judgeCells(blockId: string, { grid, cells, facts }: { grid: Grid; cells: Cells; facts: LayerFacts }): PlacedCells | null {
  const own = cells.map((value, cell) => (grid.share[cell]! > 0 ? value : NaN));
  const stats = layerStats(grid, own);
  if (stats.n === 0) return null;
  const isClass = layerType(facts.type).resampling === 'class';
  const { coverage, ...numbers } = stats;
  const statistics: LayerStatistics = isClass
    ? { n: numbers.n, missing: numbers.missing, mean: null, sd: null, min: null, max: null, quantiles: [], histogram: null, classes: classShares(grid, own) }
    : { ...numbers, quantiles: [...numbers.quantiles], histogram: numbers.histogram === null ? null : { ...numbers.histogram, counts: [...numbers.histogram.counts] }, classes: null };
  const found = layerFindings({ grid, cells: own, stats, facts }).filter((finding) => !(isClass && finding.code === 'constant'));
  return { blockId, gridKey: grid.key, cells: own, coverage: Math.min(1, coverage), statistics, ...markedFindings(found, own.length) };
}

/** A byte has room for this many findings with a place. */
const mostMarks = 8;

/** Findings without their cells, which become bits of one byte a cell. */
function markedFindings(found: readonly PlacedFinding[], count: number): Pick<PlacedCells, 'findings' | 'marks'> {
  const placed = found.filter((finding) => finding.cells !== undefined).slice(0, mostMarks);
  const findings = found.map(({ cells: _, ...finding }, at): LayerFinding => {
    const mark = placed.indexOf(found[at]!);
    return mark < 0 ? finding : { ...finding, mark };
  });
  if (placed.length === 0) return { findings, marks: null };
  const marks = new Uint8Array(count);
  placed.forEach(({ cells }, mark) => cells!.forEach((value, cell) => (marks[cell]! |= value << mark)));
  return { findings, marks };
}

/** Share of the covered area that each class holds. */
function classShares(grid: Grid, cells: Cells): { value: number; share: number }[] {
  const areas = new Map<number, number>();
  for (let cell = 0; cell < cells.length; cell++) {
    if (!Number.isNaN(cells[cell]!)) areas.set(cells[cell]!, (areas.get(cells[cell]!) ?? 0) + grid.share[cell]!);
  }
  const covered = coverageOf(grid, cells) * grid.share.reduce((sum, share) => sum + share, 0);
  return [...areas].sort((a, b) => a[0] - b[0]).map(([value, area]) => ({ value, share: area / covered }));
}
