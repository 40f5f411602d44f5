import type { BlockView } from '../../../shared/contracts/blocks.ts';
import type { BlockRowView } from '../../../shared/contracts/rows.ts';
import type { ZoneOperation, ZoneView, ZoningDoubt } from '../../../shared/contracts/zonings.ts';
import { defineGrid } from '../../../shared/analysis/grid.ts';
import { withoutNarrow } from '../../../shared/analysis/labelsNarrow.ts';
import { cellsForArea, smallPatches } from '../../../shared/analysis/sieve.ts';
import { labelVines, rowRuns } from '../../../shared/analysis/snapToRows.ts';
import type { MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { rowsFromStored } from '../../../shared/geo/storedRows.ts';
import { vineTable } from '../../../shared/geo/vines.ts';
import type { StripChoice, StripRow } from '../rowstrip/rowStripTypes.ts';
import { chosenRuns } from '../rowstrip/stripLayout.ts';
import { ordinalAt, runInRow, stripRows, type Counting } from '../sampling/stripOfPlan.ts';

/** Rows of a block for the strip, with the zones of a zoning's labels: the same reading of vines as the server's. */
export function zonedStripRows(block: BlockView, rows: readonly BlockRowView[], labels: Uint8Array, doubtful: ZoningDoubt['runs'] = []): StripRow[] {
  const boundary = block.boundary.coordinates as unknown as MultiPolygonLonLat;
  const grid = defineGrid(boundary, block.cellSizeM);
  const laid = rowsFromStored({ boundary, rowBearingDeg: block.rowBearingDeg, epsg: block.epsg }, rows as never);
  const vines = vineTable(laid);
  const zoneOf = labels.length === grid.cols * grid.rows ? labelVines(grid, labels, vines) : new Uint8Array(vines.count);
  const runs = new Map<string, { zone: number; from: number; to: number }[]>();
  for (const run of rowRuns(vines, zoneOf)) {
    const id = rows[run.rowIndex]!.id;
    runs.set(id, [...(runs.get(id) ?? []), { zone: run.label, from: run.fromOrdinal, to: run.toOrdinal }]);
  }
  const drawn = stripRows(rows, runs as never, { posts: { start: block.startPostColour, end: block.endPostColour }, counting: block });
  const byId = new Map(rows.map((row) => [row.id, row]));
  return drawn.map((row) => ({ ...row, doubtful: doubtful.filter(({ rowId }) => rowId === row.id).map((run) => runInRow(byId.get(row.id)!, run, block.vineOneEnd)) }));
}

/** Patches below the smallest that can be worked, and zones with a strip too narrow: what a hand edit may have left. */
export function tooSmall(block: BlockView, labels: Uint8Array, { smallestPatchHa, narrowestRows }: { smallestPatchHa: number; narrowestRows: number }): { patches: number; narrow: number[] } {
  const grid = defineGrid(block.boundary.coordinates as unknown as MultiPolygonLonLat, block.cellSizeM);
  if (labels.length !== grid.cols * grid.rows) return { patches: 0, narrow: [] };
  const patches = smallPatches(labels, grid.cols, { minCells: cellsForArea(smallestPatchHa, grid.cellSizeM) }).length;
  const widthM = narrowestRows * block.rowSpacingM;
  if (widthM <= grid.cellSizeM) return { patches, narrow: [] };
  const cleaned = withoutNarrow(labels, grid.cols, { widthM, cellSizeM: grid.cellSizeM });
  return { patches, narrow: [...new Set(labels.filter((label, cell) => cleaned[cell] !== label))].sort((a, b) => a - b) };
}

/** Own colours of zones by number, as maps and strips take them. */
export function ownColoursOf(zones: readonly Pick<ZoneView, 'number' | 'colour'>[]): Record<number, string> {
  return Object.fromEntries(zones.flatMap(({ number, colour }) => (colour ? [[number, colour]] : [])));
}

/** The rows or parts of rows that stand chosen, by permanent row and vine ordinals, as an edit asks for them. `vineOneEnd`: where the strip begins. */
export function chosenRows(choice: StripChoice, strip: readonly StripRow[], { rows, vineOneEnd }: { rows: readonly BlockRowView[]; vineOneEnd: Counting['vineOneEnd'] }): Extract<ZoneOperation, { kind: 'giveRows' }>['rows'] {
  return chosenRuns(strip, choice).flatMap(({ rowId, from, to }) => {
    const row = rows.find(({ id }) => id === rowId);
    if (!row) return [];
    const ends = [choice.fromM === null ? null : from, choice.toM === null ? null : to];
    const [first, last] = (vineOneEnd === 'start' ? ends : ends.reverse()).map((vine) => (vine === null ? null : ordinalAt(row, vine, vineOneEnd)));
    return [{ rowId, from: first!, to: last! }];
  });
}

/** The zone that a split along the one chosen row would cut: the zone asked for where the row crosses it, else the one with most of the row. */
export function zoneToSplit(strip: readonly StripRow[], choice: StripChoice | null, asked: number | null): number | null {
  if (choice === null || choice.rowIds.length !== 1) return null;
  const vines = new Map<number, number>();
  for (const { zone, from, to } of strip.find(({ id }) => id === choice.rowIds[0])?.zoneRuns ?? []) if (zone > 0) vines.set(zone, (vines.get(zone) ?? 0) + to - from + 1);
  if (asked !== null && vines.has(asked)) return asked;
  return [...vines].sort((a, b) => b[1] - a[1] || a[0] - b[0])[0]?.[0] ?? null;
}
