import { useI18n } from 'vue-i18n';
import type { PlanBasis } from '../../shared/contracts/planBasis.ts';
import { planChoices, type PlanChoices } from '../../shared/contracts/planChoices.ts';
import type { EarlierPlan } from '../../shared/contracts/plans.ts';
import { versionName } from '../lib/numberedName.ts';
import { useSamplingStore } from '../stores/sampling.ts';

export interface NewPlanStart {
  readonly basis: PlanBasis;
  readonly choices: PlanChoices;
  readonly name: string;
  /** The plan that the choices are taken from. */
  readonly from: EarlierPlan | null;
}

/** Where a new plan on zones begins: with what an earlier plan of the block asked (`like`, its id), or with the usual. */
export function useNewPlan(): (estateId: string, zoningId: string, like: string | null) => Promise<NewPlanStart> {
  const { t } = useI18n();
  const store = useSamplingStore();

  return async (estateId, zoningId, like) => {
    if (like !== null) {
      const from = await store.earlierPlan(estateId, zoningId, like);
      const basis = await store.basis(estateId, zoningId, from.choices);
      const name = versionName(from.name, basis.zoningNumber, (plan, n) => t('sampling.nameOnVersion', { name: plan, n }));
      return { basis, choices: from.choices, name, from };
    }
    const basis = await store.basis(estateId, zoningId);
    const { walkingKmPerHour: kmPerHour, setUpSeconds: secondsPerVine } = basis.settings;
    return { basis, choices: planChoices.parse({ measures: [{ code: 'clusterCount' }], secondsPerVine, pace: { kmPerHour } }), name: t('sampling.newPlanName', { block: basis.blockName }), from: null };
  };
}
