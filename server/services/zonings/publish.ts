import { adjustedRandIndex } from '../../../shared/analysis/agreement.ts';
import { encodeCells } from '../../../shared/analysis/cellBytes.ts';
import { leavesZone, pairZones, vinesApart } from '../../../shared/analysis/zonePairs.ts';
import type { PublishEffects, ZoningComparison } from '../../../shared/contracts/zonings.ts';
import { estateSettings } from '../../../shared/contracts/estate.ts';
import { vineIndex } from '../../../shared/geo/vines.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Stale } from '../../errors.ts';
import { loadBlockVines, zonesOfVines, type BlockVines } from '../../ground/blockVines.ts';
import { zonedReadings } from '../../ground/zonedReadings.ts';
import { zonesInForce } from '../../ground/zonesInForce.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Block } from '../../models/Block.ts';
import { Estate } from '../../models/Estate.ts';
import { Lot } from '../../models/Lot.ts';
import { LotPart } from '../../models/LotPart.ts';
import { LotRowRun } from '../../models/LotRowRun.ts';
import { Person } from '../../models/Person.ts';
import { Season } from '../../models/Season.ts';
import { Zoning } from '../../models/Zoning.ts';
import { lockZoning, requireSameOutline } from './editZones.ts';
import { plansTouched } from './plansTouched.ts';
import { callOffRounds, roundsUnderWay } from './roundsTouched.ts';
import { readLabels } from './view.ts';
import { say } from '../../sentences/say.ts';

/**
 * What publishing would touch: readings by their vines, rounds on their way, plans, lots, and zones with too few sampled vines. A zone that
 * only gets another number is named as such; its vines do not count as moved, as in a comparison of two versions.
 */
export async function publishEffects(access: Access, zoningId: string): Promise<PublishEffects> {
  const { zoning, live, ground, before, after } = await loadBoth(access, zoningId);
  const season = await Season.query().findOne({ estateId: access.estateId, id: zoning.seasonId }).throwIfNotFound();
  const readings = await zonedReadings(access.estateId, { ground, zoneOf: after, seasonId: zoning.seasonId });
  const inBlock = readings.filter((reading) => reading.vine >= 0);
  const isMoved = leavesZone(before, after);
  const { rounds, toVisit } = await roundsUnderWay(access, ground);
  const sampled = [...new Set(inBlock.map(({ vine }) => vine))];
  return {
    season: season.name,
    replaces: live?.number ?? null,
    shownNow: await shownNow(access, { zoning, season }),
    readingsMoved: live ? inBlock.filter((reading) => isMoved(reading.vine)).length : 0,
    readingsOutside: readings.filter((reading) => reading.zone === 0).length,
    vinesMoved: live ? [...after.keys()].filter(isMoved).length : 0,
    renumbered: live ? pairZones(before, after).filter(({ from, to }) => from !== to).map(({ from, to }) => ({ from, to })).sort((a, b) => a.from - b.from) : [],
    openRounds: rounds,
    byZone: byZone(after, { sampled, toVisit }),
    plans: live ? await plansTouched(access, { live, ground, isMoved }) : [],
    lots: live ? await lotsTouched(access, { zoning, ground, isMoved }) : [],
    underFloor: await underFloor(access, { after, sampled }),
  };
}

/** Zones of another season that stand on the map of the block: publishing leaves them in force for their season. */
async function shownNow({ estateId }: Access, { zoning: { blockId }, season }: { zoning: Zoning; season: Season }): Promise<PublishEffects['shownNow']> {
  const shown = await zonesInForce(estateId).where({ blockId }).whereNot({ seasonId: season.id }).first();
  if (!shown) return null;
  const { name, startsOn } = await Season.query().findOne({ estateId, id: shown.seasonId }).throwIfNotFound();
  return { number: shown.number, season: name, isLater: startsOn > season.startsOn };
}

/** Puts the draft in force for its season; the zones that were in force are kept as they were. Whoever has the draft open to edit sees by its revision that it is one no more. */
export async function publishZones(access: Access, zoningId: string, input: { reason: string; revision: number; replaces?: number | null | undefined; callOff?: readonly string[]; now: Date }): Promise<void> {
  await Zoning.transaction(async (trx) => {
    const zoning = await lockZoning(trx, access, zoningId, input.revision);
    if (zoning.state !== 'draft') throw new Clash('notDraft', say('onlyDraftPublished'));
    // Two drafts of a block that are published in one moment go one after the other.
    await Block.query(trx).findOne({ estateId: access.estateId, id: zoning.blockId }).forUpdate();
    const ground = await loadBlockVines(access.estateId, zoning.blockId, trx);
    requireSameOutline(zoning, ground);
    const [replaced] = await Zoning.query(trx).where({ estateId: access.estateId, blockId: zoning.blockId, seasonId: zoning.seasonId, state: 'live' }).forUpdate().select('id', 'number', 'publishedBy');
    if (input.replaces !== undefined && input.replaces !== (replaced?.number ?? null)) throw await inForceMeanwhile(replaced);
    if (replaced) await Zoning.query(trx).where({ estateId: access.estateId, id: replaced.id }).patch({ state: 'retired' });
    await Zoning.query(trx).where({ estateId: access.estateId, id: zoningId }).patch({ state: 'live', publishedAt: input.now, publishedBy: access.personId, revision: zoning.revision + 1 });
    await callOffRounds(trx, access, { blockId: zoning.blockId, roundIds: input.callOff ?? [] });
    await writeAudit(trx, access, { action: 'zones.publish', subjectType: 'zoning', subjectId: zoningId, subjectName: ground.block.name, before: { live: replaced?.number ?? null }, after: { live: zoning.number }, reason: input.reason || null });
  });
}

/** Other zones came into force than those whose replacing was shown: they would be put out of force unseen. */
async function inForceMeanwhile(live: Zoning | undefined): Promise<Stale> {
  const who = live?.publishedBy ? (await Person.query().findById(live.publishedBy))?.name : undefined;
  return new Stale('zonesChanged', live && who !== undefined ? say('zonesInForceChanged', { who, number: live.number }) : say('zonesChangedBySomebody'));
}

/** Two zonings of one block vine by vine; `zones`: the number that the first is looked at with. */
export async function compareZonings(access: Access, zoningId: string, { otherId, zones }: { otherId: string; zones: number | null }): Promise<ZoningComparison> {
  const one = await Zoning.query().findOne({ estateId: access.estateId, id: zoningId }).throwIfNotFound();
  const other = await Zoning.query().findOne({ estateId: access.estateId, id: otherId, blockId: one.blockId }).throwIfNotFound();
  const ground = await loadBlockVines(access.estateId, one.blockId);
  const [a, b] = await Promise.all([zonesShown(access, one, { ground, zones }), zonesShown(access, other, { ground })]);
  const both = [...a.keys()].filter((vine) => a[vine]! > 0 && b[vine]! > 0);
  const zonesOf = (zones: Uint8Array) => both.map((vine) => zones[vine]!);
  const pairs = groupBy(both, (vine) => `${a[vine]} ${b[vine]}`);
  return {
    vines: both.length,
    vinesMoved: both.filter((vine) => a[vine] !== b[vine]).length,
    vinesApart: vinesApart(zonesOf(a), zonesOf(b)),
    adjustedRand: adjustedRandIndex(zonesOf(a), zonesOf(b)),
    pairs: [...pairs.values()].map((vines) => ({ from: a[vines[0]!]!, to: b[vines[0]!]!, vines: vines.length })).sort((x, y) => x.from - y.from || x.to - y.to),
  };
}

/** Zones of the vines as a page shows them: of the number asked for, else those kept, fixed for the run or advised. */
export async function zonesShown(access: Access, zoning: Zoning, { ground, zones = null }: { ground: BlockVines; zones?: number | null }): Promise<Uint8Array> {
  requireSameOutline(zoning, ground);
  if (zoning.state === 'running' || zoning.state === 'failed') throw new Clash('notReady', say('noResultToCompare', { number: zoning.number }));
  const { labels, gridKey } = await readLabels(access, zoning.id, zones);
  return zonesOfVines(ground, { labels: Buffer.from(encodeCells(labels)), gridKey });
}

interface Both {
  zoning: Zoning;
  live: Zoning | undefined;
  ground: BlockVines;
  before: Uint8Array;
  after: Uint8Array;
}

async function loadBoth(access: Access, zoningId: string): Promise<Both> {
  const zoning = await Zoning.query().findOne({ estateId: access.estateId, id: zoningId }).throwIfNotFound();
  const live = await Zoning.query().findOne({ estateId: access.estateId, blockId: zoning.blockId, seasonId: zoning.seasonId, state: 'live' });
  const ground = await loadBlockVines(access.estateId, zoning.blockId);
  const after = zonesOfVines(ground, zoning);
  return { zoning, live, ground, after, before: live ? zonesOfVines(ground, live) : new Uint8Array(after.length) };
}

/** The season's lots keep their vines whatever the zones are called; what changes is which zone those vines count for. A picked lot is in the cellar. */
async function lotsTouched(access: Access, { zoning, ground, isMoved }: { zoning: Zoning; ground: BlockVines; isMoved: (vine: number) => boolean }): Promise<PublishEffects['lots']> {
  const runs = (await LotRowRun.query()
    .where('lot_row_runs.estateId', access.estateId)
    .join(`${LotPart.tableName} as part`, 'part.id', 'lot_row_runs.lotPartId')
    .join(`${Lot.tableName} as lot`, 'lot.id', 'part.lotId')
    .join('scenarios as scenario', 'scenario.id', 'lot.scenarioId')
    .where('scenario.isLive', true)
    .where('lot.seasonId', zoning.seasonId)
    .where('part.blockId', zoning.blockId)
    .select('lot.id as lotId', 'lot.name as lotName', 'lot.state as lotState', 'lot_row_runs.rowId', LotRowRun.raw('lower(lot_row_runs.vines) as "from"'), LotRowRun.raw('upper(lot_row_runs.vines) - 1 as "to"'))) as unknown as { lotId: string; lotName: string; lotState: Lot['state']; rowId: string; from: number; to: number }[];
  return [...groupBy(runs, (run) => run.lotId).values()]
    .map((own) => ({ id: own[0]!.lotId, name: own[0]!.lotName, isPicked: own[0]!.lotState === 'picked', vinesMoved: own.reduce((sum, run) => sum + movedInRun(ground, run, isMoved), 0) }))
    .filter((lot) => lot.vinesMoved > 0);
}

function movedInRun(ground: BlockVines, run: { rowId: string; from: number; to: number }, isMoved: (vine: number) => boolean): number {
  const row = ground.rowIndexOf.get(run.rowId);
  if (row === undefined) return 0;
  let count = 0;
  for (let ordinal = run.from; ordinal <= run.to; ordinal++) {
    const vine = vineIndex(ground.vines, row, ordinal);
    if (vine >= 0 && isMoved(vine)) count += 1;
  }
  return count;
}

/** Zones in which fewer vines were sampled this season than the estate's floor, where the block was sampled at all. */
async function underFloor(access: Access, { after, sampled }: { after: Uint8Array; sampled: number[] }): Promise<PublishEffects['underFloor']> {
  if (sampled.length === 0) return [];
  const { floorVines } = estateSettings.parse((await Estate.query().findById(access.estateId).throwIfNotFound()).settings);
  return zonesIn(after).map((zone) => ({ zone, sampled: sampled.filter((vine) => after[vine] === zone).length, floor: floorVines })).filter((row) => row.sampled < row.floor);
}

function byZone(after: Uint8Array, { sampled, toVisit }: { sampled: readonly number[]; toVisit: readonly number[] }): PublishEffects['byZone'] {
  const seen = new Set(sampled);
  const count = (vines: Iterable<number>, zone: number) => [...vines].filter((vine) => after[vine] === zone).length;
  return zonesIn(after).map((zone) => ({ zone, vines: count(after.keys(), zone), sampled: count(seen, zone), toVisit: count(toVisit.filter((vine) => !seen.has(vine)), zone) }));
}

function zonesIn(zoneOf: Uint8Array): number[] {
  return [...new Set(zoneOf)].filter((zone) => zone > 0).sort((a, b) => a - b);
}
