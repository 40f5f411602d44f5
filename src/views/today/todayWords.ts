import type { RouteLocationRaw } from 'vue-router';
import type { TodayLine, TodayOf } from '../../../shared/contracts/today.ts';
import type { ChipKind } from '../../components/base/StateChip.vue';
import type { Format } from '../../lib/format.ts';
import type { RouteName } from '../../router/routeNames.ts';

/** A line of the day as it is read: what, what to do about it, how far, when, and where it leads. */
export interface TodaySentence {
  readonly key: string;
  readonly title: string;
  readonly detail: string;
  readonly far: string;
  readonly when: { readonly kind: ChipKind; readonly text: string } | null;
  readonly to: RouteLocationRaw | null;
}

interface Reader {
  t: (key: string, named?: Record<string, unknown>, plural?: number) => string;
  format: Format;
  /** The place by name, or null where the person may not go or it does not exist. */
  placeOf: (name: RouteName, params?: Record<string, string>, query?: Record<string, string>) => RouteLocationRaw | null;
}

type Words<Kind extends TodayLine['kind']> = (line: TodayOf<Kind>, reader: Reader) => Omit<TodaySentence, 'key' | 'far' | 'when'> & Partial<Pick<TodaySentence, 'far' | 'when'>>;

const plain = (text: string) => ({ kind: 'plain', text }) as const;

function restrictionTime({ state, startsAt, endsAt, lifted }: TodayOf<'restriction'>, t: Reader['t'], format: Format): TodaySentence['when'] {
  if (lifted !== null) return plain(t('today.liftedAt', { time: format.dateTime(lifted.at) }));
  if (state === 'comes') return { kind: 'asks', text: t('today.fromTime', { time: format.dateTime(startsAt) }) };
  return state === 'endsSoon' ? { kind: 'asks', text: t('today.ends', { time: format.dateTime(endsAt) }) } : { kind: 'stop', text: t('today.until', { time: format.dateTime(endsAt) }) };
}

/** One row a kind of thing. */
const words: { [Kind in TodayLine['kind']]: Words<Kind> } = {
  restriction: (line, { t, format, placeOf }) => ({
    ...(line.lifted === null
      ? { title: t(line.state === 'comes' ? 'today.restrictionComes' : 'today.restriction', { block: line.blockName }), detail: t('today.restrictionDetail', { product: line.product }) }
      : { title: t('today.restrictionLifted', { block: line.blockName }), detail: t('today.restrictionLiftedDetail', { product: line.product, name: line.lifted.by, reason: line.lifted.reason }) }),
    when: restrictionTime(line, t, format),
    to: placeOf('restrictions'),
  }),
  notice: (line, { t, format, placeOf }) => ({
    title: t('today.notice', { number: line.number, lot: line.lotName }),
    detail: t('today.noticeDetail'),
    when: line.pickOn === null ? null : plain(format.date(line.pickOn, 'weekday')),
    to: placeOf('pickBoard', {}, { notice: String(line.number) }),
  }),
  round: (line, { t, format, placeOf }) => ({
    title: t('today.round', { block: line.blockName }),
    detail: line.isMine && !line.seen ? t('today.roundUnseen') : t(line.isMine ? 'today.roundMine' : 'today.roundDetail'),
    far: t('today.roundFar', { done: format.number(line.done), vines: format.number(line.vines) }),
    when: roundDay(line, t, format),
    to: (line.isMine ? placeOf('fieldWalk', { roundId: line.id }) : null) ?? placeOf('targets', { planId: line.planId }),
  }),
  conflict: (line, { t, format, placeOf }) => ({ title: t('today.conflict', { n: format.number(line.total) }, line.total), detail: t('today.conflictDetail'), when: { kind: 'asks', text: t('today.asks') }, to: placeOf('conflicts') }),
  labelTwice: (line, { t, format, placeOf }) => ({ title: t('today.labelTwice', { n: format.number(line.total) }, line.total), detail: t('today.labelTwiceDetail'), when: { kind: 'asks', text: t('today.asks') }, to: placeOf('conflicts') ?? placeOf('lab') }),
  question: (line, { t, placeOf }) => ({ title: t('today.question', { file: line.fileName }), detail: t('today.questionDetail'), when: { kind: 'asks', text: t('today.asks') }, to: placeOf('imports') }),
  proposal: (line, { t, format, placeOf }) => ({
    title: t('today.proposal', { block: line.blockName, number: line.number }),
    detail: line.advisedZones === 1 ? t('today.proposalOne') : t('today.proposalDetail', { n: format.number(line.advisedZones ?? 0) }, line.advisedZones ?? 0),
    to: placeOf('zoning', { blockId: line.blockId, zoningId: line.id }),
  }),
  draft: (line, { t, placeOf }) => ({ title: t('today.draft', { block: line.blockName, number: line.number }), detail: t('today.draftDetail'), to: placeOf('zoneEditor', { zoningId: line.id }) }),
  lacking: (line, { t, format, placeOf }) => {
    const [read, wanted] = [sum(line.zones.map((zone) => zone.read)), sum(line.zones.map((zone) => zone.wanted))];
    const zones = line.zones.map((zone) => t('today.lackingZone', { zone: zone.name, n: format.number(zone.wanted - zone.read) }, zone.wanted - zone.read));
    return { title: t('today.lacking', { block: line.blockName, n: format.number(wanted - read) }, wanted - read), detail: `${zones.join('; ')}.`, far: t('today.roundFar', { done: format.number(read), vines: format.number(wanted) }), to: placeOf('targets', { planId: line.id }) };
  },
  marks: (line, { t, format, placeOf }) => ({ title: t('today.marks', { block: line.blockName, n: format.number(line.vines) }, line.vines), detail: t('today.marksDetail'), to: placeOf('block', { blockId: line.blockId }) }),
  provisional: (line, { t, format, placeOf }) => ({ title: t('today.provisional', { block: line.blockName, n: format.number(line.readings) }, line.readings), detail: t('today.provisionalDetail'), to: placeOf('lab') ?? placeOf('blockRipeness', { blockId: line.blockId }) }),
  bags: (line, { t, format, placeOf }) => ({ title: t('today.bags', { n: format.number(line.total) }, line.total), detail: t('today.bagsDetail'), to: placeOf('lab') }),
  lot: (line, { t, format, placeOf }) => ({
    title: t('today.lot', { lot: line.name }),
    detail: t(line.confirmed ? 'today.lotConfirmed' : 'today.lotOpen'),
    far: line.inDays < 0 ? t('today.daysPast', { n: format.number(-line.inDays) }, -line.inDays) : t('today.inDays', { n: format.number(line.inDays) }, line.inDays),
    when: { kind: line.inDays < 0 || (line.inDays <= 3 && !line.confirmed) ? 'asks' : 'plain', text: format.date(line.pickOn, 'weekday') },
    to: placeOf('lot', { lotId: line.id }),
  }),
  mail: (line, { t, format, placeOf }) => ({ title: t('today.mail', { n: format.number(line.failed) }, line.failed), detail: t('today.mailDetail'), to: placeOf('mail') }),
  backup: (line, { t, format, placeOf }) => ({ title: line.lastAt === null ? t('today.backupNone') : t('today.backupOld', { day: format.date(line.lastAt) }), detail: t('today.backupDetail'), to: placeOf('settings') }),
};

export function sentenceOf(line: TodayLine, reader: Reader): TodaySentence {
  const own = (words[line.kind] as Words<TodayLine['kind']>)(line as never, reader);
  const id = 'id' in line ? line.id : 'blockId' in line ? line.blockId : '';
  return { far: '', when: null, ...own, key: `${line.kind} ${id}` };
}

function roundDay(line: TodayOf<'round'>, t: Reader['t'], format: Format): TodaySentence['when'] {
  if (line.state === 'late') return { kind: 'asks', text: t('today.lateSince', { day: format.date(line.onDate, 'weekday') }) };
  if (line.state === 'today') return { kind: 'news', text: t('today.isToday') };
  return plain(format.date(line.onDate, 'weekday'));
}

const sum = (values: readonly number[]) => values.reduce((total, value) => total + value, 0);
