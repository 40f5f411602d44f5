import { computed, type ComputedRef } from 'vue';
import { useI18n } from 'vue-i18n';
import { spellLabelCode } from '../../shared/field/labelCode.ts';
import { useFormat } from './useFormat.ts';
import { useMeasureName } from './useMeasureName.ts';
import { useRefusalWords } from './useRefusalWords.ts';
import { useVineName } from './useVineName.ts';
import { useFieldStore } from '../stores/field.ts';
import type { Entry, KeptBag, KeptPhoto } from '../offline/fieldDatabase.ts';
import type { IconName } from '../components/base/iconPaths.ts';

/** Something that was typed, closed or taken with this phone. */
export interface OutboxLine {
  readonly id: string;
  readonly icon: IconName;
  readonly what: string;
  readonly place: string;
  readonly at: string;
  readonly isReceived: boolean;
  /** What the server said of it, where it said more than that it was received. */
  readonly note: string;
}

/** All that a person did with this phone, what waits first, then the newest: each is a line, so that the two numbers above can be counted in it. */
export function useOutboxLines(): ComputedRef<readonly OutboxLine[]> {
  const { t } = useI18n();
  const format = useFormat();
  const [field, nameOf, refusalWords, vineName] = [useFieldStore(), useMeasureName(), useRefusalWords(), useVineName()];

  function what({ reading, finding }: Entry): string {
    if (finding) return t(`field.reason.${finding.state}`);
    return reading ? `${nameOf(reading.measureCode)}: ${(reading.valueTyped ?? String(reading.value)).replace('.', format.point)}` : '';
  }
  function note({ outcome }: Entry): string {
    if (outcome?.state === 'refused') return refusalWords(outcome);
    return outcome?.state === 'conflict' ? t('field.conflict') : '';
  }
  const ofEntry = (entry: Entry): OutboxLine => ({ ...common(entry), icon: entry.kind === 'finding' ? 'missingVine' : 'vine', what: what(entry), place: vineName({ ...entry, rowLabel: entry.row, vineNumber: entry.vine }), note: note(entry) });
  const ofPhoto = (photo: KeptPhoto): OutboxLine => ({ ...common(photo), icon: 'photo', what: t('field.photo'), place: vineName({ ...photo, rowLabel: photo.row, vineNumber: photo.vine }), note: '' });
  const ofBag = (bag: KeptBag): OutboxLine => ({ ...common(bag), icon: 'bag', what: t('field.bag.closed', { code: spellLabelCode(bag.code) }), place: t('field.bag.ofZone', { zone: bag.zone, n: bag.bag.vines.length }, bag.bag.vines.length), note: bag.outcome?.state === 'refused' ? refusalWords(bag.outcome) : '' });

  return computed(() => [...field.all.map(ofEntry), ...field.photos.map(ofPhoto), ...field.bags.map(ofBag)].sort((a, b) => Number(a.isReceived) - Number(b.isReceived) || b.at.localeCompare(a.at)));
}

const common = ({ id, at, received }: Entry | KeptPhoto | KeptBag) => ({ id, at, isReceived: received === 1 });
