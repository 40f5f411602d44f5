/**
 * Codes of bag labels: five letters and a check letter, written in two groups of three.
 *
 * The alphabet is the consonants without Q and Y. No figure, so no spreadsheet reads a number, an exponent or a leading zero;
 * no vowel, so no month, no TRUE and no word in any of our languages. Nineteen letters, a prime: with weights 1 to 6 the sum
 * modulo 19 is zero for a right code, and then every single wrong letter and every exchange of two letters is caught
 * (the weighted modulus of ISO 2108's ten-figure book numbers, with 19 in place of 11).
 */
export const LABEL_LETTERS = 'BCDFGHJKLMNPRSTVWXZ';

const BASE = LABEL_LETTERS.length;
const PAYLOAD = 5;
const CHECK_WEIGHT = PAYLOAD + 1;

/** How many different codes there are: 2 476 099. */
export const LABEL_CODES = BASE ** PAYLOAD;

export type ReadLabel =
  | { readonly code: string }
  /** `length`: not six letters; `letter`: one that is never printed; `check`: the letters do not fit each other. */
  | { readonly problem: 'length' | 'letter' | 'check'; readonly at: string };

/** The code of a number from 0 to LABEL_CODES − 1: labelCode(0) = 'BBBBBB', labelCode(1) = 'BBBBCV'. */
export function labelCode(number: number): string {
  if (!Number.isInteger(number) || number < 0 || number >= LABEL_CODES) throw new Error(`Label number ${number} is outside 0…${LABEL_CODES - 1}`);
  let rest = number;
  let payload = '';
  for (let place = 0; place < PAYLOAD; place++) {
    payload = LABEL_LETTERS[rest % BASE]! + payload;
    rest = Math.floor(rest / BASE);
  }
  return payload + checkLetter(payload);
}

/** The sixth letter, the one that makes the weighted sum a multiple of 19. */
export function checkLetter(payload: string): string {
  const sum = weightedSum(payload);
  const letter = LABEL_LETTERS.split('').find((_, value) => (sum + CHECK_WEIGHT * value) % BASE === 0);
  return letter!;
}

/** What was typed or scanned: small letters, spaces, hyphens and an address before the code are taken as meant. */
export function readLabelCode(text: string): ReadLabel {
  const typed = (text.trim().split('/').pop() ?? '').toUpperCase().replace(/[\s\-–.]/gu, '');
  const strange = [...typed].find((letter) => !LABEL_LETTERS.includes(letter));
  if (strange !== undefined) return { problem: 'letter', at: strange };
  if (typed.length !== CHECK_WEIGHT) return { problem: 'length', at: typed };
  return weightedSum(typed) % BASE === 0 ? { code: typed } : { problem: 'check', at: typed };
}

/** As people read it: 'KDTHRX' is 'KDT HRX'. */
export function spellLabelCode(code: string): string {
  return `${code.slice(0, 3)} ${code.slice(3)}`;
}

function weightedSum(letters: string): number {
  return [...letters].reduce((sum, letter, place) => sum + (place + 1) * LABEL_LETTERS.indexOf(letter), 0);
}
