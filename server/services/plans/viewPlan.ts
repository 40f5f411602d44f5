import type { Point } from 'geojson';
import type { z } from 'zod';
import { planBasis, type PlanBasis } from '../../../shared/contracts/planBasis.ts';
import { planChoices } from '../../../shared/contracts/planChoices.ts';
import type { PlanList, PlanSummary, PlanView, VineWords, walkFacts, zoneDrawFacts } from '../../../shared/contracts/plans.ts';
import { rowRuns } from '../../../shared/analysis/snapToRows.ts';
import { vineLabel } from '../../../shared/geo/numbering.ts';
import { fromUtm } from '../../../shared/geo/utm.ts';
import { vineXY } from '../../../shared/geo/vines.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import type { Access } from '../../access/access.ts';
import { loadBlockVines, zonesOfVines, type BlockVines } from '../../ground/blockVines.ts';
import { zonesInForce } from '../../ground/zonesInForce.ts';
import { Block } from '../../models/Block.ts';
import { asGeoJson } from '../../models/geometry.ts';
import { Person } from '../../models/Person.ts';
import { Plan } from '../../models/Plan.ts';
import { Round } from '../../models/Round.ts';
import { Target } from '../../models/Target.ts';
import { Zoning } from '../../models/Zoning.ts';

/** The stored record of a plan's calculation. */
export interface PlanRecord {
  basis: PlanBasis;
  counts: { visits: number; hours: number };
  draw: z.infer<typeof zoneDrawFacts>[];
  walk: z.infer<typeof walkFacts> | null;
}

interface StoredDraw {
  at: string;
  by: string;
  reason: string;
  seed: number;
  targets: unknown[];
}

/** Plans of the estate, of a block or of a zoning, newest first. */
export async function listPlans(access: Access, filter: { zoningId?: string; blockId?: string }): Promise<PlanSummary[]> {
  const query = Plan.query().where({ estateId: access.estateId }).orderBy('createdAt', 'desc').limit(200);
  if (filter.zoningId) query.where({ zoningId: filter.zoningId });
  if (filter.blockId) query.where({ blockId: filter.blockId });
  const plans = await query;
  return summariesOf(access, plans);
}

/** Zones that a plan can be made on: those in force, one a block; and the blocks without any. */
export async function plannableZonings(access: Access): Promise<Pick<PlanList, 'zonings' | 'withoutZones'>> {
  const { estateId } = access;
  const zonings = await zonesInForce(estateId).whereNotNull('labels').select('id', 'number', 'name', 'blockId');
  const blocks = await Block.query().where({ estateId }).whereNull('retiredAt').orderBy('name').select('id', 'name');
  const zoned = blocks.flatMap((block) => zonings.filter(({ blockId }) => blockId === block.id).map(({ id, number }) => ({ id, number, blockId: block.id, blockName: block.name })));
  return { zonings: zoned, withoutZones: blocks.filter(({ id }) => zoned.every(({ blockId }) => blockId !== id)).map(({ id, name }) => ({ id, name })) };
}

/** `known` spares reading the block again where it was just read. */
export async function viewPlan(access: Access, planId: string, known?: BlockVines): Promise<PlanView> {
  const plan = await Plan.query().findOne({ estateId: access.estateId, id: planId }).throwIfNotFound();
  const [summary] = await summariesOf(access, [plan]);
  const ground = known ?? (await loadBlockVines(access.estateId, plan.blockId));
  const targets = await Target.query().where({ estateId: access.estateId, planId }).orderBy('walkOrder').select('targets.*', asGeoJson('position', 7).as('position'));
  const record = plan.result as PlanRecord;
  const draws = plan.draws as StoredDraw[];
  const people = await Person.query().findByIds([...new Set(draws.map(({ by }) => by))]).select('id', 'name');
  const zoneNumber = new Map(record.basis.zones.map(({ id, number }) => [id, number]));
  return {
    ...summary!,
    choices: planChoices.parse(plan.options),
    seed: plan.seed,
    basis: planBasis.parse(record.basis),
    draw: record.draw,
    walk: record.walk,
    targets: targets.map((target) => {
      const [lon, lat] = (target.position as Point).coordinates as [number, number];
      return {
        id: target.id, ...vineWords(ground, target.rowId, target.ordinal), zone: zoneNumber.get(target.zoneId) ?? 0, drawOrder: target.drawOrder, walkOrder: target.walkOrder,
        reserve: target.reserveRowId === null || target.reserveOrdinal === null ? null : vineWords(ground, target.reserveRowId, target.reserveOrdinal),
        measures: target.measureCodes, position: [lon, lat] as [number, number],
      };
    }),
    runs: await runsOf(access.estateId, plan.zoningId, ground),
    startPostColour: ground.block.startPostColour,
    endPostColour: ground.block.endPostColour,
    oldDraws: draws.map(({ at, by, reason, seed, targets: old }) => ({ at, by: people.find(({ id }) => id === by)?.name ?? '', reason, seed, vines: old.length })),
  };
}

async function runsOf(estateId: string, zoningId: string, ground: BlockVines): Promise<PlanView['runs']> {
  const zoning = await Zoning.query().findOne({ estateId, id: zoningId }).throwIfNotFound();
  const byRow = groupBy(rowRuns(ground.vines, zonesOfVines(ground, zoning)), ({ rowIndex }) => rowIndex);
  return [...byRow.entries()].map(([index, runs]) => ({ rowId: ground.stored[index]!.id, runs: runs.map(({ label, fromOrdinal, toOrdinal }) => ({ zone: label, from: fromOrdinal, to: toOrdinal })) }));
}

/** A vine as people in the block name it. */
export function vineWords(ground: BlockVines, rowId: string, ordinal: number): VineWords {
  const index = ground.rowIndexOf.get(rowId);
  if (index === undefined) return { rowId, rowLabel: '', ordinal, vineNumber: ordinal };
  const row = ground.rows.rows[index]!;
  const place = ground.block.withoutRows ? vineXY(row, ordinal) : null;
  return { rowId, rowLabel: ground.stored[index]!.label, ordinal, vineNumber: vineLabel(row, ordinal, ground.block.vineOneEnd), ...(place === null ? {} : { place: [...fromUtm(place, ground.block.epsg)] as [number, number] }) };
}

async function summariesOf(access: Access, plans: Plan[]): Promise<PlanSummary[]> {
  const { estateId } = access;
  const [blocks, zonings, replaced, rounds, targets] = await Promise.all([
    Block.query().where({ estateId }).findByIds([...new Set(plans.map(({ blockId }) => blockId))]).select('id', 'name'),
    Zoning.query().where({ estateId }).findByIds([...new Set(plans.map(({ zoningId }) => zoningId))]).select('id', 'number'),
    replacedZones(estateId, plans),
    countBy(Round.query().where({ estateId }).whereIn('planId', plans.map(({ id }) => id)).groupBy('planId').select('planId').count('id as count')),
    countBy(Target.query().where({ estateId }).whereIn('planId', plans.map(({ id }) => id)).groupBy('planId').select('planId').count('id as count')),
  ]);
  return plans.map((plan) => ({
    id: plan.id,
    name: plan.name,
    state: plan.state,
    isPilot: plan.isPilot,
    zoningId: plan.zoningId,
    zoningNumber: zonings.find(({ id }) => id === plan.zoningId)?.number ?? 0,
    replacedBy: replaced.get(plan.zoningId) ?? null,
    blockId: plan.blockId,
    blockName: blocks.find(({ id }) => id === plan.blockId)?.name ?? '',
    vines: targets.get(plan.id) ?? 0,
    hours: hoursOf(plan.result as PlanRecord),
    measures: planChoices.parse(plan.options).measures.map(({ code }) => code),
    rounds: rounds.get(plan.id) ?? 0,
    createdAt: plan.createdAt.toISOString(),
    lockedAt: plan.lockedAt?.toISOString() ?? null,
  }));
}

/** Versions of these plans that others with other zones have replaced, and the ones in force; a version taken up again as it was replaces nothing. */
async function replacedZones(estateId: string, plans: Plan[]): Promise<Map<string, NonNullable<PlanSummary['replacedBy']>>> {
  const rows = (await Zoning.query()
    .alias('old')
    .where({ 'old.estateId': estateId })
    .whereIn('old.id', [...new Set(plans.map(({ zoningId }) => zoningId))])
    .joinRaw("join zonings live on live.estate_id = old.estate_id and live.block_id = old.block_id and live.season_id = old.season_id and live.state = 'live' and live.labels is distinct from old.labels")
    .select('old.id as oldId', 'live.id as id', 'live.number as number')) as unknown as { oldId: string; id: string; number: number }[];
  return new Map(rows.map(({ oldId, id, number }) => [oldId, { id, number }]));
}

/** Hours as walked and worked where the walk is known, else as planned. */
function hoursOf({ counts, walk }: PlanRecord): number {
  return walk === null ? counts.hours : (walk.walkingS + walk.serviceS) / 3600;
}

async function countBy(query: PromiseLike<unknown>): Promise<Map<string, number>> {
  const rows = (await query) as { planId: string; count: number }[];
  return new Map(rows.map(({ planId, count }) => [planId, Number(count)]));
}
