import { useI18n } from 'vue-i18n';
import type { LabFileView } from '../../../shared/contracts/lab.ts';
import { spellLabelCode } from '../../../shared/field/labelCode.ts';
import { useFormat } from '../../composables/useFormat.ts';
import { useMeasureName } from '../../composables/useMeasureName.ts';

type Word = LabFileView['words'][number];
type Question = LabFileView['questions'][number];

/** What was understood of a laboratory's file, and what is asked about it, in the reader's language. */
export function useLabWords() {
  const { t, te } = useI18n();
  const format = useFormat();
  const nameOf = useMeasureName();

  /** Numbers as the reader writes them; labels in two groups. */
  function values(params: Word['params']): Record<string, string | number> {
    return Object.fromEntries(Object.entries(params).map(([key, value]) => {
      if (key === 'label') return [key, spellLabelCode(String(value))];
      if (key === 'measure') return [key, nameOf(String(value))];
      if (key === 'day') return [key, format.date(String(value), 'year')];
      if (typeof value !== 'number' || ['line', 'count', 'titles', 'cells'].includes(key)) return [key, value];
      return [key, format.number(value, decimalsOf(value))];
    }));
  }

  // A measure without a unit leaves a blank before the full stop.
  const sentence = ({ code, params }: Word): string => t(`lab.word.${code}`, values(params)).replace(/ \.$/, '.');
  const question = ({ code, params }: Question): string => t(`lab.ask.${code}`, values(params));
  function choice({ code }: Question, { value, label }: Question['choices'][number]): string {
    if (label !== null) return label;
    const own = `lab.choice.${code}.${value}`;
    if (te(own)) return t(own);
    const common = `lab.choice.any.${value}`;
    if (te(common)) return t(common);
    return te(`lab.unit.${value}`) ? t(`lab.unit.${value}`) : nameOf(value);
  }
  return { sentence, question, choice };
}

function decimalsOf(value: number): number {
  return (String(value).split('.')[1] ?? '').length;
}
