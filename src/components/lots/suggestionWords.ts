import { useI18n } from 'vue-i18n';
import type { AgainstReasonView, SuggestionView } from '../../../shared/contracts/suggestions.ts';
import { useFormat } from '../../composables/useFormat.ts';
import { chanceText } from './lotFigures.ts';

type LeftOut = SuggestionView['leftOut'][number];
type Placed = SuggestionView['lots'][number]['zones'][number];

/** The figures of a reason as its sentence wants them. */
function useReasonFigures(): (reason: LeftOut['reason'] | AgainstReasonView) => Record<string, string> {
  const { t } = useI18n();
  const format = useFormat();
  return (reason) => ({
    ...('tonnes' in reason ? { tonnes: format.withUnit('fruitMass', reason.tonnes), limit: format.withUnit('fruitMass', reason.limit) } : {}),
    ...('litres' in reason ? { litres: format.withUnit('volume', reason.litres), limit: format.withUnit('volume', reason.limit), chance: chanceText(reason.chance, format) } : {}),
    ...('measure' in reason ? { measure: t(`ripeness.measure.${reason.measure}`) } : {}),
    ...('value' in reason ? { value: format.number(reason.value, reason.measure === 'ph' ? 2 : 1) } : {}),
  });
}

/** Why a zone could not be placed, and what would let it in. */
export function useLeftOutWords(): (zone: LeftOut) => string {
  const { t } = useI18n();
  const figures = useReasonFigures();
  return ({ reason }) => t(`lots.suggest.why.${reason.code}`, figures(reason));
}

/** Why a zone is in its lot, and what stands against the lot that would be nearest otherwise; nothing is said of a nearer one that only the sum of all lots is against. */
export function usePlacedWords(): (zone: Placed) => string {
  const { t } = useI18n();
  const format = useFormat();
  const figures = useReasonFigures();
  const spreads = (distance: number) => format.number(distance, 1);

  function beside({ distance, nearest }: Placed['reason']): string {
    if (nearest === undefined) return '';
    if (nearest === null) return t('lots.suggest.nowhereElse');
    const there = { lot: nearest.lotName, distance: spreads(nearest.distance) };
    const why = nearest.against && t(`lots.suggest.against.${nearest.against.code}`, figures(nearest.against));
    if (distance === null) return why ? t('lots.suggest.cannotTake', { ...there, why }) : t('lots.suggest.elsewhere', there);
    if (nearest.distance >= distance) return t('lots.suggest.elsewhere', there);
    return why ? t('lots.suggest.nearerBut', { ...there, why }) : '';
  }

  return ({ reason }) => `${reason.distance === null ? t('lots.suggest.why.alone') : t('lots.suggest.why.alike', { distance: spreads(reason.distance) })} ${beside(reason)}`.trim();
}
