import { z } from 'zod';
import { id, isoDate } from './common.ts';
import { figure } from './lots.ts';

/** What a notice says: frozen when it is sent, so that everybody holds the same. */
export const noticeBody = z.object({
  lotName: z.string(),
  pickOn: isoDate,
  fromTime: z.string(),
  /** Zones in order, each with the rows of a part. */
  zones: z.array(z.object({ blockName: z.string(), number: z.number().int(), name: z.string(), rows: z.array(z.string()).nullable() })),
  tonnes: figure.nullable(),
  tank: z.string().nullable(),
  note: z.string(),
});
export type NoticeBody = z.infer<typeof noticeBody>;

/** One thing that differs from the notice before. */
export const noticeDifference = z.object({ what: z.enum(['pickOn', 'fromTime', 'zones', 'tonnes', 'tank', 'note', 'lotName']), before: z.string(), after: z.string() });
export type NoticeDifference = z.infer<typeof noticeDifference>;

export const noticeView = z.object({
  id,
  number: z.number().int(),
  lotId: id.nullable(),
  replacesNumber: z.number().int().nullable(),
  /** Set once a newer notice of the lot is out: this one no longer holds. */
  voidAt: z.string().nullable(),
  replacedBy: z.number().int().nullable(),
  /** Nothing replaced it, and its day has gone by at the estate. */
  isOver: z.boolean(),
  body: noticeBody,
  differences: z.array(noticeDifference),
  sentBy: z.string(),
  sentAt: z.string(),
  readers: z.array(z.object({ personId: id, name: z.string(), readAt: z.string().nullable() })),
  mine: z.boolean(),
});
export type NoticeView = z.infer<typeof noticeView>;

export const newNotice = z.object({
  fromTime: z.string().regex(/^([01]\d|2[0-3]):[0-5]\d$/, 'Give a time such as 06:00.').default('06:00'),
  note: z.string().trim().max(1000).default(''),
  /** Who must know: pickers, driver, cellar. */
  people: z.array(id).min(1, 'Choose at least one person who must know.').max(200),
});
export type NewNotice = z.infer<typeof newNotice>;

/** What the code on paper says to anybody who holds it. */
export const noticeState = z.object({ number: z.number().int(), estateName: z.string(), isVoid: z.boolean(), isOver: z.boolean(), replacedBy: z.number().int().nullable(), pickOn: isoDate.nullable() });
export type NoticeState = z.infer<typeof noticeState>;
