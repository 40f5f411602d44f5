import type { MultiPolygon } from 'geojson';
import { decodeLabels } from '../../../shared/analysis/cellBytes.ts';
import type { MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { layerType } from '../../../shared/catalog/layerTypes.ts';
import type { LayerAdvice } from '../../../shared/analysis/layerAdvice.ts';
import type { LayerPair } from '../../../shared/analysis/layerPairs.ts';
import { zoneDifferences } from '../../../shared/analysis/zoningStats.ts';
import type { Zone as TracedZone, ZoneEvidence, ZoningWarning } from '../../../shared/analysis/zoningTypes.ts';
import type { FruitCheck } from '../../../shared/analysis/verdictFruit.ts';
import type { VerdictResult } from '../../../shared/analysis/verdict.ts';
import { zoningOptions, type EvidenceRow, type ZoneView, type ZoningLine, type ZoningRequestOptions, type ZoningView } from '../../../shared/contracts/zonings.ts';
import { sampleSize } from '../../../shared/sampling/sampleSize.ts';
import type { Access } from '../../access/access.ts';
import { isBearing, loadBlockVines, zonesOfVines, type BlockVines } from '../../ground/blockVines.ts';
import { estateDay } from '../../ground/estateDay.ts';
import { AuditEntry } from '../../models/AuditEntry.ts';
import { Block } from '../../models/Block.ts';
import { asGeoJson } from '../../models/geometry.ts';
import { Job } from '../../models/Job.ts';
import { Layer } from '../../models/Layer.ts';
import { MeasureRecord } from '../../models/MeasureRecord.ts';
import { Person } from '../../models/Person.ts';
import { Season } from '../../models/Season.ts';
import { Zone } from '../../models/Zone.ts';
import { Zoning } from '../../models/Zoning.ts';
import { ZoningCandidate } from '../../models/ZoningCandidate.ts';

/** What `zonings.evidence` holds. */
interface StoredEvidence {
  /** Zonings of before have no `holds` or `calmWithin`. */
  rows: (Omit<ZoneEvidence, 'holds' | 'calmWithin'> & Partial<Pick<ZoneEvidence, 'holds' | 'calmWithin'>>)[];
  advisedWeights: LayerAdvice[];
  weights: { layerId: string; weight: number }[];
  alsoOffer: number[];
  bestSeveral: number;
  warnings: ZoningWarning[];
  fruit?: FruitCheck;
  /** Zonings of before have none. */
  layerPairs?: LayerPair[];
  /** By measure; zonings of before have none. */
  fruitDays?: Record<string, string[]>;
  /** Zonings of before have none: theirs were the block's. */
  cellSizeM?: number;
  /** Zonings of before have none. */
  standsOut?: MultiPolygonLonLat | null;
}

interface StoredCandidate {
  zones: TracedZone[];
}

const lineColumns = ['id', 'estateId', 'blockId', 'number', 'name', 'state', 'verdict', 'advisedZones', 'chosenZones', 'seed', 'revision', 'createdBy', 'createdAt', 'publishedAt', 'seasonId'] as const;

/** Zonings of a block, or of the estate's blocks, newest first. */
export async function listZonings(access: Access, blockId: string | null): Promise<ZoningLine[]> {
  const query = Zoning.query().where({ estateId: access.estateId }).orderBy('createdAt', 'desc').limit(400).select(...lineColumns);
  if (blockId !== null) {
    await Block.query().findOne({ estateId: access.estateId, id: blockId }).throwIfNotFound();
    query.where({ blockId });
  }
  return linesOf(access, await query);
}

async function linesOf(access: Access, rows: Zoning[]): Promise<ZoningLine[]> {
  const people = await Person.query().findByIds([...new Set(rows.flatMap((row) => (row.createdBy ? [row.createdBy] : [])))]).select('id', 'name');
  const jobs = await Job.query().where({ estateId: access.estateId, subjectType: 'zoning' }).whereIn('subjectId', rows.map((row) => row.id)).orderBy('createdAt').select('id', 'subjectId', 'state');
  const seasons = await Season.query().where({ estateId: access.estateId }).select('id', 'name', 'startsOn');
  const today = await estateDay(access.estateId, new Date());
  const pastSeasonOf = (row: Zoning) => {
    const own = seasons.find(({ id }) => id === row.seasonId)!;
    return seasons.some(({ startsOn }) => startsOn > own.startsOn && startsOn <= today) ? own.name : null;
  };
  const jobOf = (row: Zoning) => jobs.findLast((job) => job.subjectId === row.id);
  return rows.map((row) => ({
    id: row.id,
    blockId: row.blockId,
    number: row.number,
    name: row.name,
    state: row.state,
    pastSeason: pastSeasonOf(row),
    isStopped: row.state === 'failed' && jobOf(row)?.state === 'cancelled',
    verdict: (row.verdict as VerdictResult | null)?.verdict ?? null,
    isJudged: (row.verdict as VerdictResult | null)?.isJudged ?? false,
    advisedZones: row.advisedZones,
    chosenZones: row.chosenZones,
    seed: Number(row.seed),
    revision: row.revision,
    createdBy: people.find((person) => person.id === row.createdBy)?.name ?? null,
    createdAt: row.createdAt.toISOString(),
    publishedAt: row.publishedAt?.toISOString() ?? null,
    jobId: jobOf(row)?.id ?? null,
  }));
}

/** The whole record of a zoning, with the zones of one number: `shown`, else those kept, else the number that was fixed for the run, else the advised one. */
export async function viewZoning(access: Access, zoningId: string, shown: number | null): Promise<ZoningView> {
  const zoning = await Zoning.query().findOne({ estateId: access.estateId, id: zoningId }).throwIfNotFound();
  const [line] = await linesOf(access, [zoning]);
  const ground = await loadBlockVines(access.estateId, zoning.blockId);
  const options = zoningOptions.safeParse(zoning.options);
  const evidence = zoning.evidence as StoredEvidence | null;
  const verdict = zoning.verdict as VerdictResult | null;
  const kept = zoning.baseLabels !== null;
  const count = shown ?? ownNumber(zoning);
  const candidate = await ZoningCandidate.query().findOne({ estateId: access.estateId, zoningId, zoneCount: count });
  const stored = candidate ? (candidate.zones as StoredCandidate) : null;
  const showsKept = kept && (shown === null || shown === zoning.chosenZones);
  const job = line!.jobId === null ? undefined : await Job.query().findById(line!.jobId).select('problem');
  const layers = options.success ? await layersOf(access, options.data.layers.map(({ layerId }) => layerId), evidence) : [];
  const zones = showsKept ? await keptZones(access, zoning) : stored && candidate ? proposedZones(stored, ground, candidate, zoning) : [];
  return {
    ...line!,
    blockName: ground.block.name,
    withBlockNames: options.success && options.data.withBlocks.length > 0 ? (await Block.query().where({ estateId: access.estateId }).findByIds(options.data.withBlocks).orderBy('name').select('name')).map(({ name }) => name) : [],
    cellSizeM: evidence?.cellSizeM ?? ground.block.cellSizeM,
    options: options.success ? options.data : { layers: [], zones: 'advise', standardise: 'plain', smoothingM: 3, smallestPatchHa: 0.05, narrowestRows: 0, borders: 'free', principalComponents: false, withBlocks: [] },
    engineVersion: zoning.engineVersion,
    layers,
    layerPairs: evidence?.layerPairs ?? [],
    reasons: (verdict?.reasons ?? []).map((reason) => ({ ...reason, figures: { ...reason.figures } })),
    standsOut: evidence?.standsOut ? { type: 'MultiPolygon', coordinates: evidence.standsOut as unknown as ZoneView['geometry']['coordinates'] } : null,
    alsoOffer: evidence?.alsoOffer ?? [],
    evidence: evidence ? await evidenceRows(access, evidence.rows, ground) : [],
    // Of the zones as they are shown: a hand may have changed them since they were computed.
    differences: zoneDifferences(zones, layers.flatMap(({ layerId, type }) => (layerType(type).resampling === 'mean' ? [layerId] : []))),
    warnings: (evidence?.warnings ?? []).map((warning) => ({ ...warning, figures: { ...warning.figures } })),
    fruit: (evidence?.fruit?.tests ?? []).map(({ measure, n, p, shuffle, leaveOneOutRSquared, anova }) => ({ measure, on: evidence?.fruitDays?.[measure] ?? [], n, p, shuffle, leaveOneOutRSquared, f: anova?.f ?? null, dfBetween: anova?.dfBetween ?? null, dfWithin: anova?.dfWithin ?? null, omegaSquared: anova?.omegaSquared ?? null })),
    fruitZones: fruitZonesOf(zoning, options.data, evidence),
    beginsByHand: showsKept && candidate !== undefined && !zoning.baseLabels!.equals(candidate.labels),
    takenUpFrom: kept ? await takenUpFrom(access, zoningId) : null,
    beginsWith: kept ? new Set(decodeLabels(zoning.baseLabels!).filter((zone) => zone > 0)).size : null,
    shown: count,
    zones,
    certainty: certaintyFrom(candidate),
    problem: job?.problem ?? null,
  };
}

function certaintyFrom(candidate: ZoningCandidate | undefined): ZoningView['certainty'] {
  if (candidate?.memberships) return 'kept';
  return candidate && decodeLabels(candidate.labels).some((zone) => zone > 1) ? 'older' : 'none';
}

/** The number of zones that is meant where nobody names one: those kept, else the number that was fixed for the run, else the advised one. */
export function ownNumber({ baseLabels, chosenZones, options: stored, advisedZones }: Zoning): number {
  if (baseLabels !== null) return chosenZones ?? 1;
  const options = zoningOptions.safeParse(stored);
  return options.success && options.data.zones !== 'advise' ? options.data.zones : Math.max(1, advisedZones ?? 1);
}

/** The number of zones that readings of fruit were asked about: a block that is one was tested with the number that would come next. */
function fruitZonesOf({ advisedZones }: Zoning, options: ZoningRequestOptions | undefined, evidence: StoredEvidence | null): number | null {
  const chosen = options === undefined || options.zones === 'advise' ? (advisedZones ?? 1) : options.zones;
  return chosen > 1 ? chosen : (evidence?.bestSeveral ?? null);
}

/** The version a draft was taken up from, unless a number of zones was kept anew since. */
async function takenUpFrom({ estateId }: Access, zoningId: string): Promise<number | null> {
  const begun = await AuditEntry.query().where({ estateId, subjectType: 'zoning', subjectId: zoningId }).whereIn('action', ['zones.restore', 'zones.keep']).orderBy('id', 'desc').first();
  return begun?.action === 'zones.restore' ? (begun.after as { from: number }).from : null;
}

async function layersOf(access: Access, layerIds: string[], evidence: StoredEvidence | null): Promise<ZoningView['layers']> {
  const layers = await Layer.query().where({ estateId: access.estateId }).findByIds(layerIds).select('id', 'name', 'type', 'unit', 'measuredOn');
  return layerIds.flatMap((layerId) => {
    const layer = layers.find((candidate) => candidate.id === layerId);
    const advised = evidence?.advisedWeights.find((advice) => advice.id === layerId);
    if (!layer) return [];
    return [{
      layerId, name: layer.name, type: layer.type, unit: layer.unit, measuredOn: layer.measuredOn, role: layerType(layer.type).role,
      weight: evidence?.weights.find((entry) => entry.layerId === layerId)?.weight ?? 0,
      advised: advised ? { weight: advised.weight, code: advised.code, about: advised.about, figures: { ...advised.figures } } : null,
    }];
  });
}

/** The evidence with the sampling it would cost: each zone's mean of one measure within its margin, at the estate's assumed spread. */
async function evidenceRows(access: Access, rows: StoredEvidence['rows'], ground: BlockVines): Promise<EvidenceRow[]> {
  const measure = await MeasureRecord.query().findOne({ estateId: access.estateId, code: 'brix' });
  const bearing = ground.states.filter((state) => isBearing(state)).length;
  return rows.map((row) => {
    const vines = Math.max(2, Math.round(bearing / row.k));
    const each = measure && measure.marginKind === 'absolute' && measure.spreadKind === 'sd' ? sampleSize({ spread: measure.spreadValue, margin: measure.margin, confidence: measure.confidence, populationSize: vines, minimum: 5 }).n : null;
    const { k, varianceExplained, silhouette, calinskiHarabasz, stability, gap, score, patches, smallestZoneHa } = row;
    return { k, varianceExplained, silhouette, calinskiHarabasz, stability, holds: row.holds ?? null, gap, calmWithin: row.calmWithin ?? null, score, patches, smallestZoneHa, samples: each === null ? null : each * k, hours: each === null || !measure ? null : (each * k * measure.secondsPerSample) / 3600 };
  });
}

/** Zones as they are kept: from the zones table, traced when the labels last changed. */
export async function keptZones(access: Access, zoning: Zoning): Promise<ZoneView[]> {
  const rows = await Zone.query().where({ estateId: access.estateId, zoningId: zoning.id }).orderBy('number').select('zones.*', asGeoJson('geometry').as('geometry'));
  return rows.map((row) => {
    const statistics = row.statistics as Pick<TracedZone, 'doubtfulShare' | 'patches' | 'layers'>;
    return {
      id: row.id,
      number: row.number,
      name: row.name,
      colour: row.colour,
      areaM2: row.areaM2,
      vines: row.vineCount,
      missing: row.missingCount,
      doubtfulShare: statistics.doubtfulShare ?? null,
      patches: statistics.patches ?? 1,
      layers: [...(statistics.layers ?? [])],
      geometry: row.geometry as MultiPolygon as ZoneView['geometry'],
    };
  });
}

function proposedZones(stored: StoredCandidate, ground: BlockVines, candidate: ZoningCandidate, zoning: Zoning): ZoneView[] {
  const zoneOf = zonesOfVines(ground, { labels: candidate.labels, gridKey: zoning.gridKey });
  return stored.zones
    .filter((zone) => zone.polygonsLonLat !== null)
    .map((zone) => ({ id: null, number: zone.number, name: '', colour: null, areaM2: zone.areaM2, ...countVines(ground, zoneOf, zone.number), doubtfulShare: zone.doubtfulShare, patches: zone.patches, layers: [...zone.layers], geometry: { type: 'MultiPolygon', coordinates: zone.polygonsLonLat as unknown as ZoneView['geometry']['coordinates'] } }));
}

export function countVines(ground: BlockVines, zoneOf: Uint8Array, zone: number): { vines: number; missing: number } {
  let vines = 0;
  let missing = 0;
  zoneOf.forEach((of, vine) => {
    if (of !== zone) return;
    vines += 1;
    const state = ground.states[vine];
    if (state === 'missing' || state === 'dead') missing += 1;
  });
  return { vines, missing };
}

/** Labels of a zoning or of one of its candidates, a byte a cell, for small pictures of the block. */
export async function readLabels(access: Access, zoningId: string, zoneCount: number | null): Promise<{ labels: Uint8Array; gridKey: string }> {
  const zoning = await Zoning.query().findOne({ estateId: access.estateId, id: zoningId }).throwIfNotFound();
  if (zoning.labels !== null && (zoneCount === null || zoneCount === zoning.chosenZones)) return { labels: decodeLabels(zoning.labels), gridKey: zoning.gridKey };
  const candidate = await ZoningCandidate.query().findOne({ estateId: access.estateId, zoningId, zoneCount: zoneCount ?? ownNumber(zoning) }).throwIfNotFound();
  return { labels: decodeLabels(candidate.labels), gridKey: zoning.gridKey };
}
