import { cellAt } from '../../../shared/analysis/grid.ts';
import { encodeCells } from '../../../shared/analysis/cellBytes.ts';
import { certaintyOf, membershipAt } from '../../../shared/analysis/zoneMemberships.ts';
import { vineLabel } from '../../../shared/geo/numbering.ts';
import { fromUtm } from '../../../shared/geo/utm.ts';
import type { ExportedVine, ExportedZone } from '../../exporters/zoneExport.ts';
import { gridOf, zonesOfVines, type BlockVines } from '../../ground/blockVines.ts';
import { isDoubtful } from './doubt.ts';
import type { RunCells } from './memberships.ts';

/** Every vine with its zone of now and what the run found where it stands, from row 1 on and in each row from vine 1 on. */
export function vinesForExport(ground: BlockVines, run: RunCells, { zones, labels }: { zones: readonly ExportedZone[]; labels: Uint8Array }): ExportedVine[] {
  const grid = gridOf(ground);
  const zoneOf = zonesOfVines(ground, { labels: Buffer.from(encodeCells(labels)), gridKey: grid.key });
  const nameOf = new Map(zones.map(({ number, name }) => [number, name]));
  const { vines, block: { rowOneSide, vineOneEnd, epsg } } = ground;
  const found = Array.from(zoneOf, (zone, vine): ExportedVine & { rowIndex: number } => {
    const rowIndex = vines.row[vine]!;
    const at = [vines.x[vine]!, vines.y[vine]!] as const;
    const cell = cellAt(grid, at);
    const here = cell < 0 ? null : membershipAt(run.bands, cell, run.labels[cell]!);
    return {
      rowIndex, rowLabel: ground.stored[rowIndex]!.label, vine: vineLabel(ground.rows.rows[rowIndex]!, vines.ordinal[vine]!, vineOneEnd), zone, zoneName: nameOf.get(zone) ?? '',
      membership: here && { runZone: here.zone, share: here.share, nextZone: here.next, certainty: certaintyOf(here) }, isDoubtful: isDoubtful(run.doubt, cell), at: fromUtm(at, epsg),
    };
  });
  return found.filter(({ zone }) => zone > 0).sort((a, b) => (rowOneSide === 'high' ? b.rowIndex - a.rowIndex : a.rowIndex - b.rowIndex) || a.vine - b.vine);
}
