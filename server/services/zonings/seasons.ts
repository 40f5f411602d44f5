import { adjustedRandIndex } from '../../../shared/analysis/agreement.ts';
import { decodeFloatCells } from '../../../shared/analysis/cellBytes.ts';
import { seasonAgreement } from '../../../shared/analysis/seasonAgreement.ts';
import { vinesApart } from '../../../shared/analysis/zonePairs.ts';
import { layerType } from '../../../shared/catalog/layerTypes.ts';
import { zoningOptions, type ZoningSeasons } from '../../../shared/contracts/zonings.ts';
import type { Access } from '../../access/access.ts';
import { gridOf, loadBlockVines, type BlockVines } from '../../ground/blockVines.ts';
import { loadBlockLayers, type PlacedOnBlock } from '../../ground/zoneLayers.ts';
import { BlockLayer } from '../../models/BlockLayer.ts';
import { Season } from '../../models/Season.ts';
import { Zoning } from '../../models/Zoning.ts';
import { requireSameOutline } from './editZones.ts';
import { zonesShown } from './publish.ts';

/** Two pictures of one summer are one season's story. */
const apartDays = 200;

/** This zoning beside other seasons: their zones in force vine by vine, and earlier or later layers of the same kind cell by cell. */
export async function compareSeasons(access: Access, zoningId: string): Promise<ZoningSeasons> {
  const zoning = await Zoning.query().findOne({ estateId: access.estateId, id: zoningId }).throwIfNotFound();
  if (zoning.state === 'running' || zoning.state === 'failed') return { zones: [], layers: [] };
  const ground = await loadBlockVines(access.estateId, zoning.blockId);
  requireSameOutline(zoning, ground);
  return { zones: await otherZones(access, zoning, ground), layers: await otherLayers(access, zoning, ground) };
}

/** The last zones that each other season had in force on the same outline. */
async function otherZones(access: Access, zoning: Zoning, ground: BlockVines): Promise<ZoningSeasons['zones']> {
  const { estateId } = access;
  const published = await Zoning.query().where({ estateId, blockId: zoning.blockId, gridKey: zoning.gridKey }).whereNot({ seasonId: zoning.seasonId }).whereNotNull('publishedAt').orderBy('publishedAt', 'desc');
  const last = published.filter((one, i) => published.findIndex((other) => other.seasonId === one.seasonId) === i).slice(0, 6);
  const seasons = await Season.query().where({ estateId }).findByIds(last.map(({ seasonId }) => seasonId)).select('id', 'name');
  const mine = await zonesShown(access, zoning, ground);
  return Promise.all(last.map(async (other) => {
    const theirs = await zonesShown(access, other, ground);
    const both = [...mine.keys()].filter((vine) => mine[vine]! > 0 && theirs[vine]! > 0);
    const [a, b] = [both.map((vine) => mine[vine]!), both.map((vine) => theirs[vine]!)];
    return { zoningId: other.id, number: other.number, season: seasons.find(({ id }) => id === other.seasonId)?.name ?? '', zones: new Set(b).size, adjustedRand: adjustedRandIndex(a, b), vinesApart: vinesApart(a, b), vines: both.length };
  }));
}

/** Each measured layer of the run against the nearest one of its kind from another season. */
async function otherLayers(access: Access, zoning: Zoning, ground: BlockVines): Promise<ZoningSeasons['layers']> {
  const options = zoningOptions.safeParse(zoning.options);
  if (!options.success) return [];
  const { key } = gridOf(ground);
  const onBlock = await BlockLayer.query().where({ estateId: access.estateId, blockId: zoning.blockId, gridKey: key }).select('layerId');
  const all = await loadBlockLayers(access.estateId, zoning.blockId, onBlock.map(({ layerId }) => layerId));
  const chosen = all.filter(({ layer, placed }) => options.data.layers.some(({ layerId }) => layerId === layer.id) && placed.gridKey === key && layerType(layer.type).role === 'evidence' && layer.measuredOn !== null);
  return chosen.flatMap((one) => {
    const [other] = all.filter((candidate) => isOtherSeason(one, candidate)).sort((a, b) => daysApart(one, a) - daysApart(one, b));
    const agreement = other ? seasonAgreement(decodeFloatCells(one.placed.cells), decodeFloatCells(other.placed.cells)) : null;
    if (!other || !agreement) return [];
    return [{ layerId: one.layer.id, name: one.layer.name, measuredOn: one.layer.measuredOn!, otherId: other.layer.id, otherName: other.layer.name, otherMeasuredOn: other.layer.measuredOn!, ...agreement }];
  });
}

function isOtherSeason(one: PlacedOnBlock, other: PlacedOnBlock): boolean {
  return other.layer.type === one.layer.type && other.layer.measuredOn !== null && daysApart(one, other) >= apartDays;
}

function daysApart(one: PlacedOnBlock, other: PlacedOnBlock): number {
  return Math.abs(Date.parse(one.layer.measuredOn!) - Date.parse(other.layer.measuredOn!)) / 86_400_000;
}
