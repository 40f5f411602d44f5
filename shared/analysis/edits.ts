/**
 * The manager's hand on the zones. An edit is a plain record; applying it makes new labels from old ones and never touches
 * the old, so undo is replaying one edit less, and zones can neither overlap nor leave a gap: each cell inside has exactly
 * one label at all times. In: grid, zones, edit. Out: zones. Cost: cells, plus the cells an edit's shape touches.
 */
import type { LonLat } from '../geo/coordinates.ts';
import { AnalysisError } from './analysisError.ts';
import { cellsOfGround, type Ground } from './editsGround.ts';
import { labelsFromRuns } from './editsRuns.ts';
import { splitCells } from './editsSplit.ts';
import { assertCellCount, type Grid, type Labels } from './grid.ts';
import { cellsPerLabel, relabelled } from './labels.ts';
import { lowestFreeNumber, MAX_ZONE_NUMBER } from './zoneNumbers.ts';
import { withoutSmall } from './zoningClean.ts';

export interface ZoneInfo {
  readonly number: number;
  /** null until someone names the zone; the screen then shows its number. */
  readonly name: string | null;
  readonly colour: string | null;
}

export interface ZoneMap {
  readonly labels: Labels;
  /** One entry per label in use, ascending. */
  readonly zones: readonly ZoneInfo[];
}

export type ZoneEdit =
  | { readonly kind: 'merge'; readonly zones: readonly number[]; readonly into: number }
  /** The larger part keeps the number, the other takes the lowest free one. `alongRow` names the row followed, if any. */
  | { readonly kind: 'split'; readonly zone: number; readonly lineLonLat: readonly LonLat[]; readonly alongRow?: string | null }
  /** `toZone` may be a number not in use: then a new zone begins. */
  | { readonly kind: 'give'; readonly toZone: number; readonly ground: Ground }
  | { readonly kind: 'rename'; readonly zone: number; readonly name: string | null }
  | { readonly kind: 'renumber'; readonly numbers: readonly { readonly from: number; readonly to: number }[] }
  | { readonly kind: 'recolour'; readonly zone: number; readonly colour: string | null }
  /** Labels made elsewhere, such as zones snapped to rows, as runs (see editsRuns). `reason` says what made them. */
  | { readonly kind: 'replace'; readonly runs: readonly number[]; readonly reason: 'snapped' | 'restored' }
  | { readonly kind: 'clean'; readonly minPatchHa: number; readonly narrowestM?: number };

/** Zones from labels, with the names and colours that are known of them. Throws AnalysisError unless exactly the cells inside carry a label. */
export function zoneMapOf(grid: Grid, labels: Labels, known: readonly ZoneInfo[] = []): ZoneMap {
  assertCellCount(grid, labels, 'The zoning');
  for (let cell = 0; cell < labels.length; cell++) {
    if (labels[cell]! > 0 !== (grid.inside[cell] === 1)) throw new AnalysisError('zoning-not-of-block', 'The zoning does not fill the block cell by cell; make it again on the present outline.');
  }
  return withLabels({ labels, zones: known }, labels);
}

/** Zones after all edits in order. */
export function replayEdits(grid: Grid, base: ZoneMap, edits: readonly ZoneEdit[]): ZoneMap {
  return edits.reduce((map, edit) => applyEdit(grid, map, edit), base);
}

/** Zones after one edit; throws AnalysisError when the edit makes no sense for them or would change nothing. */
export function applyEdit(grid: Grid, map: ZoneMap, edit: ZoneEdit): ZoneMap {
  switch (edit.kind) {
    case 'merge':
      return merged(map, edit);
    case 'split':
      return split(grid, map, edit);
    case 'give':
      return given(grid, map, edit);
    case 'rename':
      return described(map, edit.zone, { name: edit.name });
    case 'recolour':
      return described(map, edit.zone, { colour: edit.colour });
    case 'renumber':
      return renumbered(map, edit);
    case 'replace':
      return replaced(grid, map, edit);
    case 'clean':
      return cleaned(grid, map, edit);
  }
}

type EditOf<Kind extends ZoneEdit['kind']> = Extract<ZoneEdit, { kind: Kind }>;

function merged(map: ZoneMap, { zones, into }: EditOf<'merge'>): ZoneMap {
  for (const zone of [...zones, into]) assertZone(map, zone);
  if (!zones.some((zone) => zone !== into)) throw new AnalysisError('edit-changes-nothing', `Choose a second zone to merge with zone ${into}.`);
  return withLabels(map, map.labels.map((label) => (zones.includes(label) ? into : label)));
}

function split(grid: Grid, map: ZoneMap, { zone, lineLonLat, alongRow = null }: EditOf<'split'>): ZoneMap {
  assertZone(map, zone);
  const cells = splitCells(grid, map.labels, { zone, lineLonLat, alongRow });
  const labels = new Uint8Array(map.labels);
  const number = freeNumber(map);
  for (const cell of cells) labels[cell] = number;
  return withLabels(map, labels);
}

function given(grid: Grid, map: ZoneMap, { toZone, ground }: EditOf<'give'>): ZoneMap {
  assertNumber(toZone);
  const labels = new Uint8Array(map.labels);
  let changed = 0;
  for (const cell of cellsOfGround(grid, ground)) {
    if (grid.inside[cell] !== 1 || labels[cell] === toZone) continue;
    labels[cell] = toZone;
    changed++;
  }
  if (changed === 0) throw new AnalysisError('edit-changes-nothing', `No ground of another zone lies there to give to zone ${toZone}; choose a larger shape or other rows.`);
  return withLabels(map, labels);
}

function described(map: ZoneMap, zone: number, change: Partial<Omit<ZoneInfo, 'number'>>): ZoneMap {
  assertZone(map, zone);
  return { ...map, zones: map.zones.map((info) => (info.number === zone ? { ...info, ...change } : info)) };
}

function renumbered(map: ZoneMap, { numbers }: EditOf<'renumber'>): ZoneMap {
  const target = new Map(map.zones.map(({ number }) => [number, number]));
  for (const { from, to } of numbers) {
    assertZone(map, from);
    assertNumber(to);
    target.set(from, to);
  }
  if (new Set(target.values()).size < target.size) throw new AnalysisError('edit-number-taken', 'Two zones would have the same number; give each its own, or merge them.');
  const table = new Uint8Array(256);
  for (const [from, to] of target) table[from] = to;
  const zones = map.zones.map((info) => ({ ...info, number: target.get(info.number)! }));
  return { labels: relabelled(map.labels, table), zones: zones.sort((a, b) => a.number - b.number) };
}

function replaced(grid: Grid, map: ZoneMap, { runs }: EditOf<'replace'>): ZoneMap {
  const labels = labelsFromRuns(runs, map.labels.length);
  const { zones } = zoneMapOf(grid, labels);
  for (const { number } of zones) assertNumber(number);
  return withLabels(map, labels);
}

function cleaned(grid: Grid, map: ZoneMap, { minPatchHa, narrowestM = 0 }: EditOf<'clean'>): ZoneMap {
  return withLabels(map, withoutSmall(grid, map.labels, { smallestPatchHa: minPatchHa, narrowestM }));
}

/** Zones whose last cell is gone leave; numbers that are new come without name and colour. */
function withLabels(map: ZoneMap, labels: Labels): ZoneMap {
  const zones: ZoneInfo[] = [];
  cellsPerLabel(labels).forEach((count, number) => {
    if (number === 0 || count === 0) return;
    zones.push(map.zones.find((info) => info.number === number) ?? { number, name: null, colour: null });
  });
  return { labels, zones };
}

function freeNumber(map: ZoneMap): number {
  const number = lowestFreeNumber(map.zones);
  if (number !== null) return number;
  throw new AnalysisError('edit-too-many-zones', `A block has at most ${MAX_ZONE_NUMBER} zones; merge some first.`);
}

function assertZone(map: ZoneMap, zone: number): void {
  if (map.zones.some(({ number }) => number === zone)) return;
  throw new AnalysisError('edit-zone-unknown', `There is no zone ${zone}; the zones are ${map.zones.map(({ number }) => number).join(', ')}.`);
}

function assertNumber(zone: number): void {
  if (Number.isInteger(zone) && zone >= 1 && zone <= MAX_ZONE_NUMBER) return;
  throw new AnalysisError('edit-zone-number', `A zone cannot have the number ${zone}; use a whole number from 1 to ${MAX_ZONE_NUMBER}.`);
}
