import { useI18n } from 'vue-i18n';
import type { EarlierFileView } from '../../../shared/contracts/earlier.ts';
import { useFormat } from '../../composables/useFormat.ts';
import { useLabWords } from '../lab/useLabWords.ts';

type Word = EarlierFileView['words'][number];
type Question = EarlierFileView['questions'][number];

/** What was understood of a table of earlier readings, in the reader's language. What every table has in common is said in the lab's words. */
export function useEarlierWords() {
  const { t, te } = useI18n();
  const format = useFormat();
  const lab = useLabWords();

  function values(params: Word['params']): Record<string, string | number> {
    return Object.fromEntries(Object.entries(params).map(([key, value]) => {
      if (key === 'day') return [key, format.date(String(value), 'year')];
      return [key, typeof value === 'number' ? format.number(value, Number.isInteger(value) ? 0 : 1) : value];
    }));
  }

  const own = (part: string, word: Word): string => {
    const count = word.params.count;
    return typeof count === 'number' ? t(`earlier.${part}.${word.code}`, values(word.params), count) : t(`earlier.${part}.${word.code}`, values(word.params));
  };
  const sentence = (word: Word): string => (te(`earlier.word.${word.code}`) ? own('word', word) : lab.sentence(word));
  const question = (asked: Question): string => (te(`earlier.ask.${asked.code}`) ? own('ask', asked) : lab.question(asked));
  function choice(asked: Question, offered: Question['choices'][number]): string {
    const key = `earlier.choice.${asked.code}.${offered.value}`;
    return offered.label === null && te(key) ? t(key) : lab.choice(asked, offered);
  }
  const refusal = (word: Word): string => own('refused', word);
  return { sentence, question, choice, refusal };
}
