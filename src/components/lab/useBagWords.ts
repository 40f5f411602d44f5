import { useI18n } from 'vue-i18n';
import type { BagLine } from '../../../shared/contracts/bags.ts';
import { useFormat } from '../../composables/useFormat.ts';
import { useVineName } from '../../composables/useVineName.ts';

/** What is said of a bag: where it comes from, who closed it or held it last, what its fruit was like. */
export function useBagWords() {
  const { t } = useI18n();
  const format = useFormat();
  const vineName = useVineName();

  function from(bag: BagLine): string {
    if (bag.blockName === null) return t('lab.unknownOrigin');
    const zone = bag.zone === null ? bag.blockName : t('lab.blockZone', { block: bag.blockName, zone: bag.zone });
    return bag.rowLabel === null || bag.vineNumber === null ? zone : t('lab.atVine', { place: zone, vine: vineName({ rowLabel: bag.rowLabel, vineNumber: bag.vineNumber, place: bag.vinePlace }, 'within') });
  }

  function closed(bag: BagLine): string {
    if (bag.closedAt === null) return '–';
    const when = format.dateTime(bag.closedAt);
    if (bag.place === 'missing' || bag.place === 'expected') return bag.holder === null ? when : t('lab.lastHeld', { who: bag.holder, when });
    return bag.holder === null ? when : t('lab.closedBy', { who: bag.holder, when });
  }

  function fruit(bag: BagLine): string {
    const parts = [bag.wet === true ? t('lab.wet') : null, bag.rotPercent !== null && bag.rotPercent > 0 ? t('lab.rot', { n: format.number(bag.rotPercent) }) : null, bag.berries !== null ? t('lab.berries', { n: format.number(bag.berries) }, bag.berries) : null, bag.swappedAt !== null ? t('lab.swapped') : null];
    return parts.filter((part) => part !== null).join(', ') || '–';
  }

  return { from, closed, fruit };
}
