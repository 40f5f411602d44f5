import type { StripRow, StripVine } from './rowStripTypes.ts';
import { zoneOf } from './stripLayout.ts';

interface WordOptions {
  /** The translator of the component that speaks. */
  readonly t: (key: string, named: Record<string, unknown>) => string;
  readonly targets: readonly StripVine[];
  readonly reserves: readonly StripVine[];
}

/** A vine in words: "Row 23, vine 33, zone 2, edge to zone 1, missing vine". */
export function spokenVine(row: StripRow, vine: number, { t, targets, reserves }: WordOptions): string {
  const zone = zoneOf(row, vine);
  const neighbour = [vine - 1, vine + 1].filter((one) => one >= 1 && one <= row.vineCount).map((one) => zoneOf(row, one)).find((one) => one !== zone);
  const isIn = (list: readonly StripVine[]) => list.some((one) => one.rowId === row.id && one.vine === vine);
  const parts = [
    t('rowstrip.spoken.vine', { row: row.label, vine }),
    zone === 0 ? t('rowstrip.spoken.noZone', {}) : t('rowstrip.spoken.zone', { zone }),
    neighbour === undefined || neighbour === 0 ? '' : t('rowstrip.spoken.edge', { zone: neighbour }),
    row.missing.includes(vine) ? t('rowstrip.legend.missing', {}) : '',
    row.replant?.includes(vine) ? t('rowstrip.legend.replant', {}) : '',
    row.offType?.includes(vine) ? t('rowstrip.legend.offType', {}) : '',
    isIn(targets) ? t('rowstrip.legend.target', {}) : '',
    isIn(reserves) ? t('rowstrip.legend.reserve', {}) : '',
    row.doubtful?.some((run) => vine >= run.from && vine <= run.to) ? t('rowstrip.legend.doubtful', {}) : '',
    row.restricted ? t('rowstrip.spoken.restricted', {}) : '',
  ];
  return parts.filter((part) => part !== '').join(', ');
}
