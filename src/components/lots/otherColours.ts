import { computed, type ComputedRef } from 'vue';
import { useI18n } from 'vue-i18n';
import { otherColour } from '../../../shared/catalog/grapeColours.ts';
import type { LotView, LotZone, LotsBoard } from '../../../shared/contracts/lots.ts';
import { useFormat } from '../../composables/useFormat.ts';

/** Words about grapes of another colour than the lot's wine. Nothing is forbidden: a blend or a blanc de noirs may be meant. */
export function useOtherColours(board: () => LotsBoard | null): {
  /** One sentence a lot that holds such grapes. */
  readonly standing: ComputedRef<readonly { readonly lotId: string; readonly words: string }[]>;
  /** What putting the zone into the lot would do; null when the colours agree. */
  wouldBe: (zone: Pick<LotZone, 'variety'>, lot: LotView) => string | null;
} {
  const { t } = useI18n();
  const format = useFormat();
  const words = (varieties: readonly string[], lot: LotView) =>
    t(`lots.otherColour.${lot.wineType === 'white' ? 'dark' : 'white'}`, { varieties: format.list([...varieties]), lot: lot.name, wine: t(`lots.otherColour.wine.${lot.wineType}`) });
  const standing = computed(() => {
    const varietyOf = new Map((board()?.zones ?? []).map(({ blockId, variety }) => [blockId, variety]));
    return (board()?.lots ?? []).flatMap((lot) => {
      const odd = [...new Set(lot.lines.map(({ blockId }) => varietyOf.get(blockId) ?? ''))].filter((variety) => otherColour(variety, lot.wineType) !== null);
      return odd.length === 0 ? [] : [{ lotId: lot.id, words: words(odd, lot) }];
    });
  });
  const wouldBe = ({ variety }: Pick<LotZone, 'variety'>, lot: LotView) => (otherColour(variety, lot.wineType) === null ? null : words([variety], lot));
  return { standing, wouldBe };
}
