import type { Language } from '../../../shared/contracts/common.ts';
import { rowRuns } from '../../../shared/analysis/snapToRows.ts';
import type { ExportFormatLine, ZoningView } from '../../../shared/contracts/zonings.ts';
import type { LonLat, MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { vineLabel } from '../../../shared/geo/numbering.ts';
import { fromUtm } from '../../../shared/geo/utm.ts';
import { pathOnPiece } from '../../../shared/geo/vines.ts';
import { encodeCells } from '../../../shared/analysis/cellBytes.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Unusable } from '../../errors.ts';
import { fileName } from '../../exporters/fileName.ts';
import { exportFormats, type ExportFormat } from '../../exporters/formats.ts';
import type { ExportedRun, ExportedZone, ZoneExport } from '../../exporters/zoneExport.ts';
import { gridOf, loadBlockVines, zonesOfVines, type BlockVines } from '../../ground/blockVines.ts';
import { loadBlockLayers, storedCells } from '../../ground/zoneLayers.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Estate } from '../../models/Estate.ts';
import { Zoning } from '../../models/Zoning.ts';
import { requireSameOutline } from './editZones.ts';
import { vinesForExport } from './exportVines.ts';
import { loadRunCells } from './memberships.ts';
import { readLabels, viewZoning } from './view.ts';
import { say } from '../../sentences/say.ts';

/** Formats that zones can leave in, for menus. */
export function listFormats(): ExportFormatLine[] {
  return exportFormats.map(({ id, mediaType, extension }) => ({ id, mediaType, extension }));
}

/** Zones as a file: those kept, or of a proposal the number asked for. Who took what away is noted. */
export async function exportZones(access: Access, zoningId: string, asked: { format: string; zones: number | null; language: Language }): Promise<{ name: string; type: string; body: Buffer }> {
  const format = exportFormats.find(({ id }) => id === asked.format);
  if (!format) throw new Unusable('unknownFormat', say('unknownFormat', { format: asked.format, formats: exportFormats.map(({ id }) => id).join(', ') }));
  const input = await exportInput(access, zoningId, { zones: asked.zones, language: asked.language, format });
  const body = await format.write(input);
  await writeAudit(Zoning.knex(), access, { action: 'zones.export', subjectType: 'zoning', subjectId: zoningId, subjectName: input.blockName, after: { format: format.id, bytes: body.length } });
  return { name: fileName([input.blockName, input.zoningName || `zones ${input.zoningNumber}`, ...(format.about ? [format.about] : [])], format.extension), type: format.mediaType, body };
}

async function exportInput(access: Access, zoningId: string, { zones, language, format }: { zones: number | null; language: Language; format: ExportFormat }): Promise<ZoneExport> {
  const view = await viewZoning(access, zoningId, zones);
  if (view.zones.length === 0) throw new Clash('notReady', say('noZonesToExport'));
  const zoning = await Zoning.query().findOne({ estateId: access.estateId, id: zoningId }).throwIfNotFound();
  const estate = await Estate.query().findById(access.estateId).throwIfNotFound();
  const ground = await loadBlockVines(access.estateId, view.blockId);
  requireSameOutline(zoning, ground);
  const { labels } = await readLabels(access, zoningId, view.shown);
  const { cols, rows, cellSizeM, epsg, x0, y0 } = gridOf(ground);
  const exported: ExportedZone[] = view.zones.map(({ number, name, colour, areaM2, vines, missing, geometry }) => ({ number, name, colour, areaM2, vines, missing, polygonsLonLat: geometry.coordinates as unknown as MultiPolygonLonLat }));
  const run = format.withMemberships ? await loadRunCells(access, zoningId, view.shown) : null;
  return {
    estateName: estate.name, blockName: view.blockName, zoningNumber: view.number, zoningName: view.name, state: view.state, language, madeAt: zoning.createdAt,
    zones: exported, runs: runsOf(ground, exported, labels), cells: { labels, cols, rows, cellSizeM, epsg, x0, y0 }, layers: format.withLayers ? await layerCells(access, view, zoning) : [],
    memberships: run?.bands ?? null, vines: run && format.withVines ? vinesForExport(ground, run, { zones: exported, labels }) : [],
  };
}

async function layerCells(access: Access, view: ZoningView, zoning: Zoning): Promise<ZoneExport['layers']> {
  const placed = (await loadBlockLayers(access.estateId, view.blockId, view.layers.map(({ layerId }) => layerId))).filter((one) => one.placed.gridKey === zoning.gridKey);
  if (placed.length === 0) throw new Clash('noLayers', say('noLayers'));
  return placed.map(({ layer, placed: on }) => ({ name: layer.name, unit: layer.unit, cells: storedCells(layer, on) }));
}

/** Runs along the rows in the numbers that the posts carry, from row 1 on and from vine 1 on. */
function runsOf(ground: BlockVines, zones: readonly ExportedZone[], labels: Uint8Array): ExportedRun[] {
  const zoneOf = zonesOfVines(ground, { labels: Buffer.from(encodeCells(labels)), gridKey: gridOf(ground).key });
  const { rowOneSide, vineOneEnd } = ground.block;
  return rowRuns(ground.vines, zoneOf)
    .filter(({ label }) => label > 0)
    .sort((a, b) => (rowOneSide === 'high' ? b.rowIndex - a.rowIndex : a.rowIndex - b.rowIndex) || (vineOneEnd === 'end' ? b.fromOrdinal - a.fromOrdinal : a.fromOrdinal - b.fromOrdinal))
    .map(({ rowIndex, fromOrdinal, toOrdinal, label }) => {
      const ends = [fromOrdinal, toOrdinal].map((ordinal) => vineLabel(ground.rows.rows[rowIndex]!, ordinal, vineOneEnd));
      return { rowLabel: ground.stored[rowIndex]!.label, fromVine: Math.min(...ends), toVine: Math.max(...ends), linesLonLat: stretches(ground, rowIndex, { fromOrdinal, toOrdinal }), zone: label, zoneName: zones.find(({ number }) => number === label)?.name ?? '' };
    });
}

/** The ground of a run along its row: from half a vine before its first to half a vine after its last, a line for each piece of the row. */
function stretches(ground: BlockVines, rowIndex: number, { fromOrdinal, toOrdinal }: { fromOrdinal: number; toOrdinal: number }): LonLat[][] {
  return ground.rows.rows[rowIndex]!.pieces.flatMap((piece) => {
    const [first, last] = [Math.max(fromOrdinal, piece.firstVine), Math.min(toOrdinal, piece.firstVine + piece.vineCount - 1)];
    if (first > last) return [];
    const along = (ordinal: number) => piece.firstVineM + (ordinal - piece.firstVine) * piece.stepM;
    const path = pathOnPiece(piece, Math.max(0, along(first) - piece.stepM / 2), Math.min(piece.lengthM, along(last) + piece.stepM / 2));
    return [path.map((point) => fromUtm(point, ground.block.epsg))];
  });
}
