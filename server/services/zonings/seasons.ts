import { adjustedRandIndex } from '../../../shared/analysis/agreement.ts';
import { seasonAgreement } from '../../../shared/analysis/seasonAgreement.ts';
import { vinesApart } from '../../../shared/analysis/zonePairs.ts';
import { layerType } from '../../../shared/catalog/layerTypes.ts';
import { groundKinds, zoningOptions, type ZoningSeasons } from '../../../shared/contracts/zonings.ts';
import type { Access } from '../../access/access.ts';
import { gridOf, loadBlockVines, type BlockVines } from '../../ground/blockVines.ts';
import { loadBlockLayers, storedCells, type PlacedOnBlock } from '../../ground/zoneLayers.ts';
import { BlockLayer } from '../../models/BlockLayer.ts';
import { Season } from '../../models/Season.ts';
import { Zoning } from '../../models/Zoning.ts';
import { runCompute } from '../../workers/computePool.ts';
import type { StableGround, StableGroundInput } from '../../workers/stableGround.ts';
import { requireSameOutline } from './editZones.ts';
import { zonesShown } from './publish.ts';

/** Two pictures of one summer are one season's story. */
const apartDays = 200;

/** This zoning beside other seasons: their zones in force vine by vine, and earlier or later layers of the same kind cell by cell. */
export async function compareSeasons(access: Access, zoningId: string): Promise<ZoningSeasons> {
  const zoning = await Zoning.query().findOne({ estateId: access.estateId, id: zoningId }).throwIfNotFound();
  if (zoning.state === 'running' || zoning.state === 'failed') return { zones: [], layers: [], ground: [] };
  const ground = await loadBlockVines(access.estateId, zoning.blockId);
  requireSameOutline(zoning, ground);
  const measured = await measuredLayers(access, zoning, ground);
  return { zones: await otherZones(access, zoning, ground), layers: otherLayers(measured), ground: await steadyGround(measured, ground) };
}

/** The last zones that each other season had in force on the same outline. */
async function otherZones(access: Access, zoning: Zoning, ground: BlockVines): Promise<ZoningSeasons['zones']> {
  const { estateId } = access;
  const published = await Zoning.query().where({ estateId, blockId: zoning.blockId, gridKey: zoning.gridKey }).whereNot({ seasonId: zoning.seasonId }).whereNotNull('publishedAt').orderBy('publishedAt', 'desc');
  const last = published.filter((one, i) => published.findIndex((other) => other.seasonId === one.seasonId) === i).slice(0, 6);
  const seasons = await Season.query().where({ estateId }).findByIds(last.map(({ seasonId }) => seasonId)).select('id', 'name');
  const mine = await zonesShown(access, zoning, { ground });
  return Promise.all(last.map(async (other) => {
    const theirs = await zonesShown(access, other, { ground });
    const both = [...mine.keys()].filter((vine) => mine[vine]! > 0 && theirs[vine]! > 0);
    const [a, b] = [both.map((vine) => mine[vine]!), both.map((vine) => theirs[vine]!)];
    return { zoningId: other.id, number: other.number, season: seasons.find(({ id }) => id === other.seasonId)?.name ?? '', zones: new Set(b).size, ownZones: new Set(a).size, adjustedRand: adjustedRandIndex(a, b), vinesApart: vinesApart(a, b), vines: both.length };
  }));
}

interface MeasuredLayers {
  /** Measured layers of the run, with a day. */
  readonly chosen: readonly PlacedOnBlock[];
  /** All layers of the block on its grid. */
  readonly all: readonly PlacedOnBlock[];
  readonly smoothingM: number;
}

async function measuredLayers(access: Access, zoning: Zoning, ground: BlockVines): Promise<MeasuredLayers> {
  const options = zoningOptions.safeParse(zoning.options);
  if (!options.success) return { chosen: [], all: [], smoothingM: 0 };
  const { key } = gridOf(ground);
  const onBlock = await BlockLayer.query().where({ estateId: access.estateId, blockId: zoning.blockId, gridKey: key }).select('layerId');
  const all = await loadBlockLayers(access.estateId, zoning.blockId, onBlock.map(({ layerId }) => layerId));
  const chosen = all.filter(({ layer, placed }) => options.data.layers.some(({ layerId }) => layerId === layer.id) && placed.gridKey === key && layerType(layer.type).role === 'evidence' && layer.measuredOn !== null);
  return { chosen, all, smoothingM: options.data.smoothingM };
}

/** Each measured layer of the run against the nearest one of its kind from another season. */
function otherLayers({ chosen, all }: MeasuredLayers): ZoningSeasons['layers'] {
  const seen = new Set<string>();
  return chosen.flatMap((one) => {
    const [other] = all.filter((candidate) => isOtherSeason(one, candidate)).sort((a, b) => daysApart(one, a) - daysApart(one, b));
    const agreement = other ? seasonAgreement(storedCells(one.layer, one.placed), storedCells(other.layer, other.placed)) : null;
    // Of two layers of one run each may be the other's nearest: they are told of once.
    const pair = other ? [one.layer.id, other.layer.id].sort().join(' ') : '';
    if (!other || !agreement || seen.has(pair)) return [];
    seen.add(pair);
    return [{ layerId: one.layer.id, name: one.layer.name, measuredOn: one.layer.measuredOn!, otherId: other.layer.id, otherName: other.layer.name, otherMeasuredOn: other.layer.measuredOn!, ...agreement }];
  });
}

/** Where each measured layer of the run keeps its rank over all seasons that have one of its kind. */
async function steadyGround({ chosen, all, smoothingM }: MeasuredLayers, ground: BlockVines): Promise<ZoningSeasons['ground']> {
  const series = chosen.map((one) => ({ one, seasons: oneASeason(one, all) }));
  const idsOf = (seasons: readonly PlacedOnBlock[]) => seasons.map(({ layer }) => layer.id).join(' ');
  const once = series.filter(({ seasons }, at) => seasons.length >= 2 && series.findIndex((other) => idsOf(other.seasons) === idsOf(seasons)) === at);
  const found = await Promise.all(once.map(async ({ one, seasons }) => {
    const { id, type, name } = one.layer;
    const input: StableGroundInput = { grid: gridOf(ground), seasons: seasons.map(({ layer, placed }) => storedCells(layer, placed)), smoothingM: layerType(type).showsRows ? smoothingM : 0 };
    const stable = await runCompute<StableGround | null>('stableGround', input, { lane: 'quick' });
    if (stable === null) return [];
    const { steady, moving, chance, areas } = stable;
    return [{
      layerId: id, type, name, measuredOn: seasons.map(({ layer }) => layer.measuredOn!), shares: { steady, moving, chance },
      areas: areas.map((area) => ({ ground: groundKinds[area.ground - 1]!, geometry: { type: 'MultiPolygon' as const, coordinates: area.polygonsLonLat as unknown as ZoningSeasons['ground'][number]['areas'][number]['geometry']['coordinates'] } })),
    }];
  }));
  return found.flat();
}

/** The layer and one of its kind from each other season, newest first among pictures of one summer; by day. */
function oneASeason(one: PlacedOnBlock, all: readonly PlacedOnBlock[]): PlacedOnBlock[] {
  const kept = [one];
  const newestFirst = all.filter((candidate) => isOtherSeason(one, candidate)).sort((a, b) => b.layer.measuredOn!.localeCompare(a.layer.measuredOn!));
  for (const candidate of newestFirst) if (kept.every((other) => daysApart(candidate, other) >= apartDays)) kept.push(candidate);
  return kept.sort((a, b) => a.layer.measuredOn!.localeCompare(b.layer.measuredOn!));
}

function isOtherSeason(one: PlacedOnBlock, other: PlacedOnBlock): boolean {
  return other.layer.type === one.layer.type && other.layer.measuredOn !== null && daysApart(one, other) >= apartDays;
}

function daysApart(one: PlacedOnBlock, other: PlacedOnBlock): number {
  return Math.abs(Date.parse(one.layer.measuredOn!) - Date.parse(other.layer.measuredOn!)) / 86_400_000;
}
