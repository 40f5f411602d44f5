import { numberNotes } from '../../../shared/analysis/numberNotes.ts';
import { layerType } from '../../../shared/catalog/layerTypes.ts';
import type { ZoneView, ZoningDoubt, ZoningView } from '../../../shared/contracts/zonings.ts';
import type { MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import type { Access } from '../../access/access.ts';
import { Clash } from '../../errors.ts';
import { fileName } from '../../exporters/fileName.ts';
import { reportTexts, type ReportLanguage } from '../../exporters/report/reportTexts.ts';
import type { ReportLayer } from '../../exporters/report/zoneReport.ts';
import { zonesReport } from '../../exporters/report/zonesReport.ts';
import { loadBlockVines } from '../../ground/blockVines.ts';
import { loadBlockLayers } from '../../ground/zoneLayers.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Estate } from '../../models/Estate.ts';
import { Person } from '../../models/Person.ts';
import { ZoneEditRecord } from '../../models/ZoneEditRecord.ts';
import { Zoning } from '../../models/Zoning.ts';
import { readDoubt } from './doubt.ts';
import { requireSameOutline } from './editZones.ts';
import { viewZoning } from './view.ts';
import { say } from '../../sentences/say.ts';

/** A zoning on paper, in the language and units of whoever prints it. */
export async function reportZoning(access: Access, zoningId: string, asked: { size: 'A4' | 'Letter'; zones: number | null; now: Date }): Promise<{ name: string; body: Buffer }> {
  const view = await viewZoning(access, zoningId, asked.zones);
  if (view.zones.length === 0) throw new Clash('notReady', say('noZonesToPrint'));
  const [estate, person, zoning] = await Promise.all([
    Estate.query().findById(access.estateId).throwIfNotFound(),
    Person.query().findById(access.personId).throwIfNotFound(),
    Zoning.query().findOne({ estateId: access.estateId, id: zoningId }).throwIfNotFound(),
  ]);
  const ground = await loadBlockVines(access.estateId, view.blockId);
  requireSameOutline(zoning, ground);
  const doubt = await readDoubt(access, zoningId, asked.zones);
  const { verdict, isJudged, advisedZones, fruitZones, reasons, differences, layerPairs, engineVersion, seed, number, name, state, pastSeason, blockName } = view;
  const language = person.language in reportTexts ? (person.language as ReportLanguage) : 'en';
  const body = await zonesReport({
    language,
    units: person.units, size: asked.size, today: asked.now, timeZone: estate.timeZone, estateName: estate.name,
    blockName, number, name, state, pastSeason, madeAt: zoning.createdAt, verdict, isJudged, advisedZones, fruitZones, differences, layerPairs, engineVersion, seed,
    shown: view.shown, warnings: warningsOf(view),
    numbers: numberNotes(advisedZones, view.alsoOffer, view.evidence),
    layers: await layersOf(access, view, reportTexts[language].derived),
    zones: view.zones.map((zone) => ({ number: zone.number, name: zone.name, colour: zone.colour, areaM2: zone.areaM2, vines: zone.vines, missing: zone.missing, doubtfulShare: doubtfulShare(zone, doubt), means: zone.layers, polygonsLonLat: zone.geometry.coordinates as unknown as MultiPolygonLonLat })),
    reasons: reasons.flatMap((reason) => (reason.code === 'stands-out-apart' && view.standsOut ? [reason, { code: 'stands-out-where', about: null }] : [reason])),
    standsOut: (view.standsOut?.coordinates ?? null) as unknown as MultiPolygonLonLat | null,
    boundary: ground.boundary, epsg: ground.block.epsg, cellSizeM: view.cellSizeM,
    smoothingM: view.options.smoothingM, smallestPatchHa: view.options.smallestPatchHa, borders: view.options.borders,
    standardise: view.options.standardise, principalComponents: view.options.principalComponents, together: view.withBlockNames,
    beginsByHand: view.beginsByHand,
    handEdits: asked.zones === null || asked.zones === zoning.chosenZones ? await handEdits(access, zoningId) : 0,
  });
  await writeAudit(Zoning.knex(), access, { action: 'zones.print', subjectType: 'zoning', subjectId: zoningId, subjectName: blockName, after: { size: asked.size } });
  return { name: fileName([blockName, name || `zones ${number}`], 'pdf'), body };
}

/** As the ledger of zones tells it. */
function doubtfulShare(zone: ZoneView, doubt: ZoningDoubt): number | null {
  if (zone.vines === 0) return zone.doubtfulShare;
  return doubt.vines === 0 ? null : (doubt.byZone.find((entry) => entry.zone === zone.number)?.vines ?? 0) / zone.vines;
}

/** What a run warned of; of borders and lost zones only for the number that it was made with. That another is shown is said by itself. */
function warningsOf({ warnings, shown, options, advisedZones }: ZoningView): ZoningView['warnings'] {
  const made = options.zones === 'advise' ? (advisedZones ?? 1) : options.zones;
  return warnings.filter(({ code }) => code !== 'number-fixed' && (shown === made || !ofNumber.has(code)));
}

const ofNumber = new Set(['zone-vanished', 'rows-took-zone', 'zone-elsewhere', 'rows-against-ground']);

/** Names, numbers and colours leave the ground as it was computed. */
const harmless = new Set(['rename', 'renumber', 'recolour']);

async function handEdits(access: Access, zoningId: string): Promise<number> {
  const edits = await ZoneEditRecord.query().where({ estateId: access.estateId, zoningId, undone: false }).select('operation');
  return edits.filter(({ operation }) => !harmless.has((operation as { edit: { kind: string } }).edit.kind)).length;
}

async function layersOf(access: Access, view: ZoningView, derived: Readonly<Record<string, string>>): Promise<ReportLayer[]> {
  const placed = await loadBlockLayers(access.estateId, view.blockId, view.layers.map(({ layerId }) => layerId));
  return view.layers.map(({ layerId, name, unit, type, measuredOn, role, weight, advised }) => {
    const override = placed.find(({ layer }) => layer.id === layerId)?.placed.override ?? null;
    return { layerId, name: layerType(type).derived ? `${name}, ${derived[type] ?? type}` : name, unit, decimals: layerType(type).decimals, measuredOn, isContext: role === 'context', isClass: layerType(type).resampling === 'class', weight, advised: advised?.weight ?? null, override: override && { by: override.by, reason: override.reason } };
  });
}
