import { cellAt, type Grid } from '../../shared/analysis/grid.ts';
import type { ZoningReadings } from '../../shared/analysis/zoningTypes.ts';
import { toUtmNear } from '../../shared/geo/utmNear.ts';
import { readPoints } from '../importers/points/readPoints.ts';
import { BadInput } from './zoneArguments.ts';
import { readOptionsFor, requireAnswered, type Block } from './zoneFiles.ts';
import { requireFile } from './zonePaths.ts';

/** Columns that say where and when a reading was taken; every other column of numbers is a measure. */
const notMeasures = /^(date|day|year|season|row|vine|plant|position|block|point|id|.*_id|sample.*|n|number|no)$/i;
const rowColumn = /^(row|row_?(id|no|number|name|label))$/i;

/** Readings of fruit from a table of rows with date, row, vine, latitude, longitude and measures. */
export async function readReadings({ grid, middleLonLat }: Block, path: string): Promise<ZoningReadings[]> {
  requireFile(path, '--readings');
  const options = readOptionsFor(path, {}, middleLonLat);
  const { questions, numbers, texts, pointsLonLat } = await readPoints(path, options);
  requireAnswered(options.fileName, questions);
  const { x, y } = toUtmNear(pointsLonLat, grid.epsg);
  const cells = Array.from(x, (east, at) => cellAt(grid, [east, y[at]!]));
  if (!cells.some((cell) => isInside(grid, cell))) throw new BadInput(`${options.fileName}: none of its ${cells.length} readings lies in the block; check that it is the right file and its positions.`);
  const rows = rowNames(numbers, texts);
  const measures = [...numbers].filter(([name]) => !notMeasures.test(name.trim()));
  if (measures.length === 0) throw new BadInput(`${options.fileName}: it has no column of numbers besides position and vine; add a measure such as brix.`);
  return measures.map(([measure, values]) => ({
    measure,
    values: cells.flatMap((cell, i) => (isInside(grid, cell) && !Number.isNaN(values[i]!) ? [{ cell, row: rows?.[i] ?? null, value: values[i]! }] : [])),
  }));
}

function isInside(grid: Grid, cell: number): boolean {
  return cell >= 0 && grid.inside[cell] === 1;
}

function rowNames(numbers: ReadonlyMap<string, Float64Array>, texts: ReadonlyMap<string, readonly string[]>): readonly string[] | null {
  const named = [...texts].find(([name]) => rowColumn.test(name.trim()));
  const numbered = [...numbers].find(([name]) => rowColumn.test(name.trim()));
  return named?.[1] ?? (numbered === undefined ? null : Array.from(numbered[1], (row) => String(row)));
}
