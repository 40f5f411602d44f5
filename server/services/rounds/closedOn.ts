import type { TransactionOrKnex } from 'objection';
import { dayBounds } from '../../../shared/season/dayBounds.ts';
import { sheetTexts, type SheetLanguage } from '../../exporters/sheetTexts.ts';
import { EntryRestriction } from '../../models/EntryRestriction.ts';

/** The restriction that ends last of those in force at some time of the estate’s day; which rows it concerns stands on sheet and phone. */
export async function longestOn(trx: TransactionOrKnex | undefined, { estateId, blockId, day, timeZone }: { estateId: string; blockId: string; day: string; timeZone: string }): Promise<EntryRestriction | undefined> {
  const { from, to } = dayBounds(timeZone, day);
  return EntryRestriction.query(trx).where({ estateId, blockId }).whereNull('liftedAt').where('startsAt', '<', to).where('endsAt', '>', from).orderBy('endsAt', 'desc').first();
}

/** That restriction in a sentence of the reader's language. */
export function closedWords({ endsAt, product }: EntryRestriction, language: string, timeZone: string): string {
  const until = new Intl.DateTimeFormat(language, { timeZone, weekday: 'short', day: 'numeric', month: 'short', hour: '2-digit', minute: '2-digit' }).format(endsAt);
  return `${sheetTexts[language as SheetLanguage].restricted} ${until} (${product}).`;
}
