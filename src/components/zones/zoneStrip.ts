import type { BlockView } from '../../../shared/contracts/blocks.ts';
import type { BlockRowView } from '../../../shared/contracts/rows.ts';
import type { ZoneOperation } from '../../../shared/contracts/zonings.ts';
import { defineGrid } from '../../../shared/analysis/grid.ts';
import { labelVines, rowRuns } from '../../../shared/analysis/snapToRows.ts';
import type { MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { rowsFromStored } from '../../../shared/geo/storedRows.ts';
import { vineTable } from '../../../shared/geo/vines.ts';
import type { StripChoice, StripRow } from '../rowstrip/rowStripTypes.ts';
import { stripRows } from '../sampling/stripOfPlan.ts';

/** Rows of a block for the strip, with the zones of a zoning's labels: the same reading of vines as the server's. */
export function zonedStripRows(block: BlockView, rows: readonly BlockRowView[], labels: Uint8Array): StripRow[] {
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
  return stripRows(rows, runs as never, { start: block.startPostColour, end: block.endPostColour });
}

/** The rows or parts of rows that stand chosen, by permanent row and vine ordinals, as an edit asks for them. */
export function chosenRows(choice: StripChoice, strip: readonly StripRow[], rows: readonly BlockRowView[]): Extract<ZoneOperation, { kind: 'giveRows' }>['rows'] {
  return choice.rowIds.flatMap((rowId) => {
    const row = rows.find(({ id }) => id === rowId);
    const drawn = strip.find(({ id }) => id === rowId);
    if (!row || !drawn) return [];
    const first = row.pieces[0]?.firstVine ?? 1;
    const step = drawn.lengthM / Math.max(1, drawn.vineCount);
    const ordinal = (m: number) => Math.round((m - drawn.startOffsetM) / step - 0.5) + first;
    const from = choice.fromM === null ? null : Math.max(first, ordinal(choice.fromM));
    const to = choice.toM === null ? null : Math.min(first + drawn.vineCount - 1, ordinal(choice.toM));
    if (from !== null && to !== null && from > to) return [];
    return [{ rowId, from, to }];
  });
}

