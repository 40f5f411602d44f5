import { estateSettings } from '../../../shared/contracts/estate.ts';
import { planBasis } from '../../../shared/contracts/planBasis.ts';
import { planChoices, type PlanChoices, type PlannedMeasureChoice } from '../../../shared/contracts/planChoices.ts';
import type { EarlierPlan } from '../../../shared/contracts/plans.ts';
import { choicesOnZones, type ChoicesOnZones } from '../../../shared/sampling/choicesOnZones.ts';
import type { Access } from '../../access/access.ts';
import { Unusable } from '../../errors.ts';
import { isBearing, loadBlockVines, zonesOfVines } from '../../ground/blockVines.ts';
import { Block } from '../../models/Block.ts';
import { Estate } from '../../models/Estate.ts';
import { MeasureRecord } from '../../models/MeasureRecord.ts';
import { Plan } from '../../models/Plan.ts';
import { Zoning } from '../../models/Zoning.ts';
import { say } from '../../sentences/say.ts';
import type { PlanRecord } from './viewPlan.ts';

/** What a new plan on these zones takes over from an earlier plan of the block, as far as it makes sense there. Writes nothing. */
export async function earlierPlanOn(access: Access, zoningId: string, planId: string): Promise<EarlierPlan> {
  const { estateId } = access;
  const [zoning, plan] = await Promise.all([
    Zoning.query().findOne({ estateId, id: zoningId }).throwIfNotFound(),
    Plan.query().findOne({ estateId, id: planId }).throwIfNotFound(),
  ]);
  if (plan.blockId !== zoning.blockId) throw await ofOtherBlock(estateId, plan, zoning);
  const basis = planBasis.parse((plan.result as PlanRecord).basis);
  const asked = planChoices.parse(plan.options);
  const inUse = await MeasureRecord.query().where({ estateId, inUse: true }).select('code');
  const [measures, gone] = [true, false].map((wanted) => asked.measures.filter(({ code }) => inUse.some((measure) => measure.code === code) === wanted)) as [PlannedMeasureChoice[], PlannedMeasureChoice[]];
  const { choices, leftOut } = await onZones(estateId, { ...asked, measures }, { from: plan.zoningId, to: zoning });
  return {
    id: plan.id,
    name: plan.name,
    zoningNumber: basis.zoningNumber,
    seasonName: basis.seasonName,
    choices: { ...choices, ...(basis.walks.length > 0 ? {} : await estatePace(estateId, choices)) },
    leftOut: { zones: [...leftOut], measures: gone.map(({ code }) => ({ code, name: basis.measures.find((measure) => measure.code === code)?.name ?? code })) },
  };
}

async function onZones(estateId: string, choices: PlanChoices, { from, to }: { from: string; to: Zoning }): Promise<ChoicesOnZones> {
  const [ground, earlier] = await Promise.all([loadBlockVines(estateId, to.blockId), Zoning.query().findOne({ estateId, id: from }).throwIfNotFound()]);
  const bearing = (zones: Uint8Array) => zones.filter((_, vine) => isBearing(ground.states[vine]!));
  return choicesOnZones(choices, bearing(zonesOfVines(ground, earlier)), bearing(zonesOfVines(ground, to)));
}

/** In plans made before walks were tried, the time at a vine holds the way to it, which is not that of a plan with a walk. */
async function estatePace(estateId: string, { pace }: PlanChoices): Promise<Pick<PlanChoices, 'secondsPerVine' | 'pace'>> {
  const { setUpSeconds, walkingKmPerHour } = estateSettings.parse((await Estate.query().findById(estateId).throwIfNotFound()).settings);
  return { secondsPerVine: setUpSeconds, pace: { ...pace, kmPerHour: walkingKmPerHour } };
}

async function ofOtherBlock(estateId: string, plan: Plan, zoning: Zoning): Promise<Unusable> {
  const blocks = await Block.query().where({ estateId }).findByIds([plan.blockId, zoning.blockId]).select('id', 'name');
  const nameOf = (id: string) => blocks.find((block) => block.id === id)?.name ?? '';
  return new Unusable('otherBlock', say('planOfOtherBlock', { plan: plan.name, block: nameOf(plan.blockId), other: nameOf(zoning.blockId) }));
}
