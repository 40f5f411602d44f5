import { z } from 'zod';

/** What no text of PostgreSQL keeps (Character Types and JSON Types of its manual): NUL, and half of a surrogate pair, which is no character. */
const unstorable = /[\0\p{Cs}]/u;
const sentence = 'The text holds a character that cannot be kept (NUL or half of one). Type it anew instead of pasting it.';

interface Place {
  readonly value: unknown;
  readonly key: string | number;
  readonly within: Place | null;
}

/** A place of such text, in values and in names of fields. With a list of its own, since input may be nested deeper than calls can be. */
function placeIn(input: unknown): Place | null {
  const waiting: Place[] = [{ value: input, key: '', within: null }];
  for (let place = waiting.pop(); place !== undefined; place = waiting.pop()) {
    const { value } = place;
    if (typeof value === 'string' && unstorable.test(value)) return place;
    if (typeof value !== 'object' || value === null) continue;
    for (const [key, inner] of Object.entries(value)) {
      if (unstorable.test(key)) return place;
      waiting.push({ value: inner, key: Array.isArray(value) ? Number(key) : key, within: place });
    }
  }
  return null;
}

function pathOf(place: Place): (string | number)[] {
  const keys: (string | number)[] = [];
  for (let each = place; each.within !== null; each = each.within) keys.push(each.key);
  return keys.reverse();
}

/** Any input whose text can be kept; a place of text that cannot is named. */
export const storableInput = z.unknown().superRefine((input, context) => {
  const place = placeIn(input);
  if (place !== null) context.addIssue({ code: 'custom', message: sentence, path: pathOf(place) });
});

/** The same before a contract, for lists whose items are refused one by one. */
export const storable = <Contract extends z.ZodType>(contract: Contract) => storableInput.pipe(contract);
