import Papa from 'papaparse';
import type { ZoneExport } from './zoneExport.ts';

/** Which vines of which row belong to which zone, one line a run (RFC 4180, with a byte-order mark for spreadsheets). Text that a spreadsheet would run is disarmed. */
export function zonesRowTable(input: ZoneExport): Buffer {
  const lines = input.runs.map((run) => ({ row: run.rowLabel, from_vine: run.fromVine, to_vine: run.toVine, zone: run.zone, zone_name: run.zoneName }));
  const fields = ['row', 'from_vine', 'to_vine', 'zone', 'zone_name'];
  return Buffer.from(`\uFEFF${Papa.unparse({ fields, data: lines }, { escapeFormulae: true, newline: '\r\n' })}\r\n`, 'utf8');
}
