import type { BlockRowView } from '../../../shared/contracts/rows.ts';
import type { ZoneOperation } from '../../../shared/contracts/zonings.ts';
import type { Format } from '../../lib/format.ts';
import { runInRow, type Counting } from '../sampling/stripOfPlan.ts';

interface Tools {
  readonly t: (key: string, named?: Record<string, unknown>, plural?: number) => string;
  readonly format: Format;
}

export interface RowsOfBlock {
  readonly rows: readonly BlockRowView[];
  readonly vineOneEnd: Counting['vineOneEnd'];
}

type GivenRows = Extract<ZoneOperation, { kind: 'giveRows' }>['rows'];

/** One edit of zones in a sentence. */
export function editSentence(operation: ZoneOperation, { t, format }: Tools): string {
  switch (operation.kind) {
    case 'merge':
      return t('zones.edit.merge', { zones: format.list(operation.zones.filter((zone) => zone !== operation.into).map(String)), into: operation.into });
    case 'giveRows':
      return t(`zones.edit.${operation.rows.every(isPart) ? 'giveParts' : 'giveRows'}`, { n: operation.rows.length, zone: operation.toZone }, operation.rows.length);
    case 'giveArea':
      return t('zones.edit.giveArea', { zone: operation.toZone });
    case 'rename':
      return t('zones.edit.rename', { zone: operation.zone, name: operation.name ?? '–' });
    case 'snap':
      return t(`zones.edit.snap.${operation.mode}`);
    case 'clean':
      return operation.narrowestRows > 0 ? t('zones.edit.cleanNarrow', { limit: format.withUnit('area', operation.smallestPatchHa, 2), rows: format.number(operation.narrowestRows) }) : t('zones.edit.clean', { limit: format.withUnit('area', operation.smallestPatchHa, 2) });
    case 'renumber':
      return t('zones.edit.renumber');
    default:
      return t(`zones.edit.${operation.kind}`, { zone: operation.zone });
  }
}

/** Which rows, vines or numbers it was, as the strip calls them; empty where the sentence says it all. */
export function editPlace(operation: ZoneOperation, { rows, vineOneEnd }: RowsOfBlock, { t, format }: Tools): string {
  if (operation.kind === 'renumber') return format.list(operation.numbers.map(({ from, to }) => t('zones.effects.renumberedPair', { from, to })));
  const given: GivenRows = operation.kind === 'giveRows' ? operation.rows : operation.kind === 'splitAlongRow' ? [{ rowId: operation.rowId, from: null, to: null }] : [];
  const found = given.flatMap((part) => {
    const at = rows.findIndex(({ id }) => id === part.rowId);
    return at < 0 ? [] : [{ part, at, row: rows[at]! }];
  });
  if (found.length === 1 && isPart(found[0]!.part)) return partWords(found[0]!, { t, vineOneEnd });
  return format.list(neighbours(found.sort((a, b) => a.at - b.at)).map((group) => groupWords(group, t)));
}

interface Found {
  readonly part: GivenRows[number];
  readonly at: number;
  readonly row: BlockRowView;
}

const isPart = ({ from, to }: GivenRows[number]): boolean => from !== null || to !== null;

function partWords({ part, row }: Found, { t, vineOneEnd }: { t: Tools['t']; vineOneEnd: RowsOfBlock['vineOneEnd'] }): string {
  const first = row.pieces[0]?.firstVine ?? 1;
  const run = runInRow(row, { from: part.from ?? first, to: part.to ?? first + row.vineCount - 1 }, vineOneEnd);
  return `${t('rowstrip.oneRow', { row: row.label })}, ${t('rowstrip.vinesFromTo', run)}`;
}

/** Rows that stand beside each other, together. */
function neighbours(found: readonly Found[]): Found[][] {
  const groups: Found[][] = [];
  for (const one of found) {
    const last = groups.at(-1);
    if (last && last.at(-1)!.at + 1 === one.at) last.push(one);
    else groups.push([one]);
  }
  return groups;
}

function groupWords(group: readonly Found[], t: Tools['t']): string {
  const [first, last] = [group[0]!.row, group.at(-1)!.row];
  return first === last ? t('rowstrip.oneRow', { row: first.label }) : t('rowstrip.rowsTo', { first: first.label, last: last.label });
}
