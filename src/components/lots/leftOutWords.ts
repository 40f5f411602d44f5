import { useI18n } from 'vue-i18n';
import type { SuggestionView } from '../../../shared/contracts/suggestions.ts';
import { useFormat } from '../../composables/useFormat.ts';
import { chanceText } from './lotFigures.ts';

type LeftOut = SuggestionView['leftOut'][number];

/** Why a zone could not be placed, and what would let it in. */
export function useLeftOutWords(): (zone: LeftOut) => string {
  const { t } = useI18n();
  const format = useFormat();
  return ({ reason }) => {
    switch (reason.code) {
      case 'overDay':
      case 'overPress': return t(`lots.suggest.why.${reason.code}`, { tonnes: format.withUnit('fruitMass', reason.tonnes), limit: format.withUnit('fruitMass', reason.limit) });
      case 'notRead': return t('lots.suggest.why.notRead', { measure: t(`ripeness.measure.${reason.measure}`) });
      case 'outsideTarget': return t('lots.suggest.why.outsideTarget', { measure: t(`ripeness.measure.${reason.measure}`), value: format.number(reason.value, reason.measure === 'ph' ? 2 : 1) });
      case 'tooBig': return t('lots.suggest.why.tooBig', { litres: format.withUnit('volume', reason.litres), limit: format.withUnit('volume', reason.limit), chance: chanceText(reason.chance, format) });
      default: return t('lots.suggest.why.noTankLeft');
    }
  };
}
