import { tableText } from './tableText.ts';
import type { ZoneExport } from './zoneExport.ts';

/** Which vines of which row belong to which zone, one line a run, as a spreadsheet of the reader's language opens it. */
export function zonesRowTable({ runs, language }: Pick<ZoneExport, 'runs' | 'language'>): Buffer {
  const lines = runs.map((run) => ({ row: run.rowLabel, from_vine: run.fromVine, to_vine: run.toVine, zone: run.zone, zone_name: run.zoneName }));
  return Buffer.from(tableText(['row', 'from_vine', 'to_vine', 'zone', 'zone_name'], lines, language), 'utf8');
}
