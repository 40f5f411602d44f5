import { randomInt } from 'node:crypto';
import type { Transaction } from 'objection';
import type { z } from 'zod';
import { estateSettings } from '../../../shared/contracts/estate.ts';
import type { NewPlan, PlanChange, planRedraw } from '../../../shared/contracts/planChoices.ts';
import type { PlanView } from '../../../shared/contracts/plans.ts';
import { planChoices } from '../../../shared/contracts/planChoices.ts';
import { pooledBasis } from '../../../shared/sampling/pooledZones.ts';
import type { Access } from '../../access/access.ts';
import { Clash } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Estate } from '../../models/Estate.ts';
import { fromGeoJson } from '../../models/geometry.ts';
import { Plan } from '../../models/Plan.ts';
import { Quota } from '../../models/Quota.ts';
import { Round } from '../../models/Round.ts';
import { Target } from '../../models/Target.ts';
import { composePlan, planEngine, positionOf, recordOf, type ComposedPlan } from './composePlan.ts';
import { viewPlan } from './viewPlan.ts';
import { say } from '../../sentences/say.ts';

const newSeed = () => randomInt(0, 2_147_483_647);

/** Makes a plan: counts, vines, reserves and walk, stored together with what they were made from. */
export async function makePlan(access: Access, zoningId: string, { name, seed = newSeed(), ...asked }: NewPlan): Promise<PlanView> {
  const { walkingKmPerHour, setUpSeconds } = estateSettings.parse((await Estate.query().findById(access.estateId).throwIfNotFound()).settings);
  const choices = { ...asked, secondsPerVine: asked.secondsPerVine ?? setUpSeconds, pace: { ...asked.pace, kmPerHour: asked.pace.kmPerHour ?? walkingKmPerHour } };
  const composed = await composePlan(access.estateId, zoningId, { choices, seed });
  const planId = await Plan.transaction(async (trx) => {
    const { basis } = composed;
    const plan = await Plan.query(trx).insert({
      estateId: access.estateId, zoningId, blockId: basis.blockId, seasonId: basis.seasonId, name, isPilot: choices.isPilot,
      options: choices, result: recordOf(composed), seed, engineVersion: planEngine, createdBy: access.personId,
    });
    await writeDraw(trx, plan.id, access.estateId, composed);
    await writeAudit(trx, access, { action: 'plans.make', subjectType: 'plan', subjectId: plan.id, subjectName: name, after: { choices, seed, vines: composed.draw.targets.length } });
    return plan.id;
  });
  return viewPlan(access, planId, composed.planGround.ground);
}

/** Changes a draft. Its vines are drawn anew with the same seed: zones whose count stays keep their vines. */
export async function changePlan(access: Access, planId: string, change: PlanChange): Promise<PlanView> {
  const known = await Plan.query().findOne({ estateId: access.estateId, id: planId }).throwIfNotFound();
  const composed = change.choices ? await composePlan(access.estateId, known.zoningId, { choices: change.choices, seed: known.seed }) : null;
  await Plan.transaction(async (trx) => {
    const plan = await lockedRow(trx, access, planId);
    if (plan.state !== 'draft') throw new Clash('locked', say('planLocked', { plan: plan.name }));
    const before = { name: plan.name, choices: plan.options };
    await plan.$query(trx).patch({ ...(change.name ? { name: change.name } : {}), ...(composed && change.choices ? { options: change.choices, isPilot: change.choices.isPilot, result: recordOf(composed), engineVersion: planEngine } : {}) });
    if (composed) await writeDraw(trx, planId, access.estateId, composed);
    await writeAudit(trx, access, { action: 'plans.change', subjectType: 'plan', subjectId: planId, subjectName: plan.name, before, after: change });
  });
  return viewPlan(access, planId, composed?.planGround.ground);
}

/** Draws other vines with another seed. The earlier draw stays on record with the reason. */
export async function redrawPlan(access: Access, planId: string, { reason, seed = newSeed() }: z.infer<typeof planRedraw>, now: Date): Promise<PlanView> {
  const known = await Plan.query().findOne({ estateId: access.estateId, id: planId }).throwIfNotFound();
  const composed = await composePlan(access.estateId, known.zoningId, { choices: planChoices.parse(known.options), seed });
  await Plan.transaction(async (trx) => {
    const plan = await lockedRow(trx, access, planId);
    if (plan.state === 'closed') throw new Clash('closed', say('planClosed', { plan: plan.name }));
    const walking = await Round.query(trx).where({ estateId: access.estateId, planId }).whereIn('state', ['sent', 'open']).resultSize();
    if (walking > 0) throw new Clash('roundsOut', say('roundsOut', { n: walking }));
    const old = await Target.query(trx).where({ estateId: access.estateId, planId }).orderBy('walkOrder').select('id', 'rowId', 'ordinal', 'drawOrder', 'reserveRowId', 'reserveOrdinal', 'zoneId');
    const draws = [...(plan.draws as unknown[]), { at: now.toISOString(), by: access.personId, reason, seed: plan.seed, targets: old }];
    const before = { seed: plan.seed };
    await plan.$query(trx).patch({ seed, draws, result: recordOf(composed), engineVersion: planEngine });
    await writeDraw(trx, planId, access.estateId, composed);
    await writeAudit(trx, access, { action: 'plans.redraw', subjectType: 'plan', subjectId: planId, subjectName: plan.name, before, after: { seed }, reason });
  });
  return viewPlan(access, planId, composed.planGround.ground);
}

/** From now on the vines stay as drawn. */
export async function lockPlan(access: Access, planId: string, now: Date): Promise<PlanView> {
  await Plan.transaction(async (trx) => {
    const plan = await lockedRow(trx, access, planId);
    if (plan.state !== 'draft') throw new Clash('locked', say('planLockedAlready', { plan: plan.name }));
    await plan.$query(trx).patch({ state: 'locked', lockedAt: now });
    await writeAudit(trx, access, { action: 'plans.lock', subjectType: 'plan', subjectId: planId, subjectName: plan.name, after: { seed: plan.seed } });
  });
  return viewPlan(access, planId);
}

function lockedRow(trx: Transaction, access: Access, planId: string) {
  return Plan.query(trx).findOne({ estateId: access.estateId, id: planId }).forUpdate().throwIfNotFound();
}

async function writeDraw(trx: Transaction, planId: string, estateId: string, composed: ComposedPlan): Promise<void> {
  const { planGround, basis, answer, draw } = composed;
  const { ground, zones, zoneOf } = planGround;
  await Quota.query(trx).delete().where({ estateId, planId });
  await Target.query(trx).delete().where({ estateId, planId });
  const sampled = pooledBasis(basis, composed.choices.pools);
  const quotas = answer.counts.zones.flatMap((planned, i) =>
    answer.question.measures.map(({ code }, j) => ({
      estateId, planId, zoneId: sampled.zones[i]!.id, measureCode: code, samples: planned.counts[j]!, drives: planned.drivers.includes(code),
      spread: sampled.measures.find((measure) => measure.code === code)!.spreads[i]!,
    })));
  await Quota.query(trx).insert(quotas);
  if (draw.targets.length === 0) return;
  const idOf = new Map(zones.map(({ id, number }) => [number, id]));
  await Target.query(trx).insert(
    draw.targets.map((target) => ({
      // A target keeps the zone that its vine stands in, also where zones are sampled as one.
      estateId, planId, zoneId: idOf.get(zoneOf[target.vine]!)!,
      rowId: ground.stored[target.rowIndex]!.id, ordinal: target.ordinal,
      position: fromGeoJson({ type: 'Point', coordinates: positionOf(planGround, target.vine) }) as never,
      drawOrder: target.drawOrder, walkOrder: target.walkOrder,
      reserveRowId: target.reserve === null ? null : ground.stored[ground.vines.row[target.reserve]!]!.id,
      reserveOrdinal: target.reserve === null ? null : ground.vines.ordinal[target.reserve]!,
      measureCodes: [...target.measures],
    })),
  );
}
