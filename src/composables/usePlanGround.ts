import { computed, onBeforeUnmount, ref, watch, type Ref, type ShallowRef } from 'vue';
import type { PlanBasis } from '../../shared/contracts/planBasis.ts';
import type { BasisChoices, PlanChoices } from '../../shared/contracts/planChoices.ts';
import type { ZoneDivision } from '../../shared/contracts/plans.ts';
import { useSamplingStore } from '../stores/sampling.ts';
import { useAsk, type Ask } from './useAsk.ts';

export interface PlanGround {
  /** Asks for the basis again when the way of finding it changes. */
  finding: Ask<void, [BasisChoices]>;
  /** Looks for divisions once a plan has come to rest over its limits. */
  looking: Ask<void, [PlanChoices]>;
  /** Vines of the plan before the basis was last asked for again. */
  visitsBefore: Ref<number | null>;
  /** Says that a basis was made by these choices. */
  foundBy: (made: PlanChoices) => void;
}

export interface PlanGroundState {
  estateId: () => string;
  basis: ShallowRef<PlanBasis | null>;
  choices: Ref<PlanChoices>;
  divisions: ShallowRef<readonly ZoneDivision[]>;
  /** Vines the plan asks for now. */
  visits: () => number | null;
  /** Numbers of zones over their limit, joined. */
  over: () => string;
  readOnly: () => boolean;
}

const restForBasisMs = 300;
const restForDivisionsMs = 500;
const basisChoices = ({ spread, draw }: PlanChoices): BasisChoices => ({ spread, draw });

/** What only the server can say while a plan is being made: spreads found in readings, vines that may be drawn, divisions of zones. */
export function usePlanGround({ estateId, basis, choices, divisions, visits, over, readOnly }: PlanGroundState): PlanGround {
  const store = useSamplingStore();
  const visitsBefore = ref<number | null>(null);
  const waiting: { basis?: ReturnType<typeof setTimeout>; divisions?: ReturnType<typeof setTimeout> } = {};
  let madeBy = JSON.stringify(basisChoices(choices.value));
  const foundBy = (made: PlanChoices) => (madeBy = JSON.stringify(basisChoices(made)));

  const finding = useAsk(async (how: BasisChoices) => {
    const before = visits();
    const found = await store.basis(estateId(), basis.value!.zoningId, how);
    if (JSON.stringify(how) !== JSON.stringify(basisChoices(choices.value))) return;
    [basis.value, visitsBefore.value, madeBy] = [found, before, JSON.stringify(how)];
  });
  watch(() => [choices.value.spread, choices.value.draw], () => {
    const how = basisChoices(choices.value);
    clearTimeout(waiting.basis);
    if (basis.value === null || readOnly() || JSON.stringify(how) === madeBy) return;
    waiting.basis = setTimeout(() => void finding.run(how), restForBasisMs);
  });

  const looking = useAsk(async (asked: PlanChoices) => {
    const { items } = await store.divisions(estateId(), basis.value!.zoningId, asked);
    if (JSON.stringify(asked) === JSON.stringify(choices.value)) divisions.value = items;
  });
  // A computed, since the advice changes with the divisions that are found while the zones over their limit do not.
  const zonesOver = computed(over);
  watch([zonesOver, choices], () => {
    clearTimeout(waiting.divisions);
    divisions.value = [];
    if (zonesOver.value !== '') waiting.divisions = setTimeout(() => void looking.run(choices.value), restForDivisionsMs);
  }, { deep: true });

  onBeforeUnmount(() => {
    clearTimeout(waiting.basis);
    clearTimeout(waiting.divisions);
  });
  return { finding, looking, visitsBefore, foundBy };
}
