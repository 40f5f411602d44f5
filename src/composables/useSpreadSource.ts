import { useI18n } from 'vue-i18n';
import { spreadSourceWords } from '../../shared/catalog/measures.ts';

/** Where a measure's first spread comes from, in the reader's language where it is one of ours; the estate's own stands as it was written. */
export function useSpreadSource(): (source: string) => string {
  const { t } = useI18n();
  return (source) => {
    const words = spreadSourceWords(source);
    return words === null ? source : t(`sampling.spreadSource.${words}`);
  };
}
