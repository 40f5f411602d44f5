import type { PlanBasis } from '../../../shared/contracts/planBasis.ts';
import { planChoices } from '../../../shared/contracts/planChoices.ts';
import type { PlanStanding } from '../../../shared/contracts/plans.ts';
import type { FieldMeasure } from '../../../shared/contracts/rounds.ts';
import { standingOf, type FieldValue, type StandingStop } from '../../../shared/field/enoughHere.ts';
import { headOf, pooledBasis } from '../../../shared/sampling/pooledZones.ts';
import { intervalOf } from '../../../shared/sampling/precision.ts';
import type { Access } from '../../access/access.ts';
import { MeasureRecord } from '../../models/MeasureRecord.ts';
import { Plan } from '../../models/Plan.ts';
import { Reading } from '../../models/Reading.ts';
import { Round } from '../../models/Round.ts';
import { Target } from '../../models/Target.ts';

/** How far each zone of a plan is with what everybody has read: the same rule as on the phone, over all of its latest visit. */
export async function standingOfPlan(access: Access, planId: string): Promise<PlanStanding[]> {
  const { estateId } = access;
  const plan = await Plan.query().findOne({ estateId, id: planId }).throwIfNotFound();
  const rounds = await Round.query().where({ estateId, planId }).whereNot({ state: 'called off' }).select('id', 'onDate');
  const latest = rounds.reduce((day, { onDate }) => (onDate > day ? onDate : day), '');
  const [measures, targets, readings] = await Promise.all([
    measuresOfPlan(estateId, plan),
    Target.query().where({ estateId, planId }).select('id', 'zoneId', 'drawOrder', 'measureCodes'),
    Reading.query().where({ estateId }).whereIn('roundId', rounds.filter(({ onDate }) => onDate === latest).map(({ id }) => id)).whereNull('excludedReason').whereNotNull('targetId').whereNotExists(Reading.query().alias('later').whereColumn('later.supersedes', 'readings.id').whereColumn('later.estateId', 'readings.estateId')).orderBy('takenAt').select('targetId', 'measureCode', 'value'),
  ]);
  const { basis, sampledZoneOf } = sampledZones(plan);
  const stops = targets.map(({ id, zoneId, drawOrder, measureCodes }): StandingStop => ({ targetId: id, zone: sampledZoneOf.get(zoneId) ?? 0, drawOrder, measures: measureCodes }));
  const values = readings.map(({ targetId, measureCode, value }): FieldValue => ({ targetId: targetId!, measureCode, value }));
  return basis.zones.flatMap((zone) => measures.map((measure) => standing({ zone: zone.number, vines: zone.vines, measure, stops, zones: basis.zones, values })));
}

function standing(ask: { zone: number; vines: number; measure: FieldMeasure; stops: StandingStop[]; zones: PlanBasis['zones']; values: FieldValue[] }): PlanStanding {
  const { zone, vines, measure, stops, zones, values } = ask;
  const { n, planned, say, more, state } = standingOf({ stops, zones }, measure, zone, values);
  const standardError = n < 2 ? Number.NaN : (state.sd / Math.sqrt(n)) * Math.sqrt(Math.max(0, 1 - n / vines));
  const half = n < 2 ? null : intervalOf({ value: state.mean, standardError, df: n - 1 }, measure.confidence).halfWidth;
  return { zone, measureCode: measure.code, n, planned, say, more, mean: n === 0 ? null : state.mean, halfWidth: half, margin: Number.isNaN(state.margin) ? null : state.margin, confidence: measure.confidence };
}

/** Zones of a plan as they are sampled, and the number among them of each zone, by its id. */
export function sampledZones(plan: Plan): { basis: PlanBasis; sampledZoneOf: Map<string, number> } {
  const { basis } = plan.result as { basis: PlanBasis };
  const { pools } = planChoices.parse(plan.options);
  return { basis: pooledBasis(basis, pools), sampledZoneOf: new Map(basis.zones.map(({ id, number }) => [id, headOf(pools, number)])) };
}

/** Measures of a plan with the margin and confidence that were chosen for it. */
export async function measuresOfPlan(estateId: string, plan: Plan): Promise<FieldMeasure[]> {
  const chosen = planChoices.parse(plan.options).measures;
  const { basis } = plan.result as { basis: PlanBasis };
  const sideOf = new Map(basis.measures.map(({ code, rowSide }) => [code, rowSide ?? 'either']));
  const rows = await MeasureRecord.query().where({ estateId }).whereIn('code', chosen.map(({ code }) => code));
  return chosen.flatMap((choice) => {
    const row = rows.find(({ code }) => code === choice.code);
    if (!row) return [];
    const { code, name, unit, decimals, minimum, maximum, skewed, measuredIn } = row;
    return [{ code, name, unit, decimals, minimum, maximum, skewed, measuredIn, rowSide: sideOf.get(code) ?? 'either', margin: choice.margin ?? row.margin, marginKind: choice.marginKind ?? row.marginKind, confidence: choice.confidence ?? row.confidence, handful: choice.handful ? { perVine: choice.handful.perVine, perCluster: choice.handful.perCluster } : null }];
  });
}
