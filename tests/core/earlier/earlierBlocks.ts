import { measures } from '../../../shared/catalog/measures.ts';
import type { EarlierBlock, EarlierSurroundings } from '../../../shared/earlier/earlierTable.ts';
import type { LonLat, MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { rowLabels, vineLabel } from '../../../shared/geo/numbering.ts';
import { buildRows } from '../../../shared/geo/rows.ts';
import { fromUtm } from '../../../shared/geo/utm.ts';
import { vineTable } from '../../../shared/geo/vines.ts';

const epsg = 32629;

/** A block of 60 m by 40 m with rows to the north every 2 m and a vine every metre, counted from the far end, its rows from the east. */
export function earlierBlock(id: string, name: string, x = 600_000, over: { plantedYear?: number; wereCounted?: 'low' } = {}): EarlierBlock {
  const corner = (dx: number, dy: number) => fromUtm([x + dx, 4_270_000 + dy], epsg);
  const boundary: MultiPolygonLonLat = [[[corner(0, 0), corner(60, 0), corner(60, 40), corner(0, 40), corner(0, 0)]]];
  const rows = buildRows(boundary, { epsg, bearingDeg: 0, bearingKind: 'grid', rowSpacingM: 2, vineSpacingM: 1, headlandM: 0 });
  const now = rowLabels(rows.rows.length, 'high');
  const was = rowLabels(rows.rows.length, 'low');
  return {
    id, name, plantedYear: over.plantedYear ?? null, epsg, vineOneEnd: 'end', rows: rows.rows, vines: vineTable(rows),
    named: rows.rows.map((_row, at) => ({ rowId: `${id}-${at}`, label: String(now[at]), labelWas: over.wereCounted ? String(was[at]) : null })),
  };
}

export function around(...blocks: EarlierBlock[]): EarlierSurroundings {
  return { blocks, today: '2026-12-01', measures: measures.map(({ code, unit, decimals, min, max }) => ({ code, name: '', unit, decimals, minimum: min, maximum: max })) };
}

/** Longitude and latitude of a vine that row and number name, moved by metres to the east. */
export function pointOf(block: EarlierBlock, rowLabel: number, vineNumber: number, eastM = 0): LonLat {
  const row = block.named.findIndex(({ label }) => label === String(rowLabel));
  const vine = [...block.vines.row.keys()].find((at) => block.vines.row[at] === row && vineLabel(block.rows[row]!, block.vines.ordinal[at]!, block.vineOneEnd) === vineNumber)!;
  return fromUtm([block.vines.x[vine]! + eastM, block.vines.y[vine]!], block.epsg);
}
