import type { LotView, LotZone } from '../../../shared/contracts/lots.ts';
import type { LotPartChange } from '../../stores/lots.ts';

/** The content of a lot as the server takes it. Lines whose zone is gone are left out: they cannot be kept by hand. */
export function partsOf(lot: LotView): LotPartChange[] {
  return lot.lines.flatMap(({ zoneId, rowIds }) => (zoneId === null ? [] : [{ zoneId, rowIds }]));
}

/** With a zone, or rows of it, put in. Rows join those of the zone that are in the lot already. */
export function withZone(lot: LotView, zone: LotZone, rowIds: readonly string[] | null): LotPartChange[] {
  const parts = partsOf(lot);
  const had = parts.find((part) => part.zoneId === zone.zoneId);
  if (had?.rowIds === null) return parts;
  const rows = rowIds === null ? null : [...new Set([...(had?.rowIds ?? []), ...rowIds])];
  const isWhole = rows !== null && zone.rows.every(({ id }) => rows.includes(id));
  return [...parts.filter((part) => part.zoneId !== zone.zoneId), { zoneId: zone.zoneId, rowIds: isWhole ? null : rows }];
}

export function withoutZone(lot: LotView, zoneId: string): LotPartChange[] {
  return partsOf(lot).filter((part) => part.zoneId !== zoneId);
}

/** What "the rest of it" means: null (the whole zone) while nothing is taken, else the rows that are free. */
export function freeRows(zone: LotZone): string[] | null {
  return zone.inLots.length === 0 ? null : zone.rows.filter(({ free }) => free).map(({ id }) => id);
}

/** Rows from one label to another, both ends included, in either order. */
export function rowsBetween(zone: LotZone, fromId: string, toId: string): string[] {
  const ends = [fromId, toId].map((wanted) => zone.rows.findIndex(({ id }) => id === wanted));
  const [first, last] = [Math.min(...ends), Math.max(...ends)];
  return first < 0 ? [] : zone.rows.slice(first, last + 1).map(({ id }) => id);
}
