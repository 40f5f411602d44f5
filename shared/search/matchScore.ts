/**
 * How well a text answers what somebody typed, whatever accents, case and one slip of the finger: each word typed must begin
 * or stand in a word of the text, or be one edit away from its beginning. In → out: two texts → 0 (no) to 1 (the same).
 * Distance after Damerau and Levenshtein (optimal string alignment: one insertion, deletion, exchange or swap counts 1).
 *
 * `matchScore('Véraison', 'veraison')` is 1; `matchScore('Long Furrow', 'furow')` is above 0; `matchScore('Long Furrow', 'gate')` is 0.
 */
export function matchScore(text: string, typed: string): number {
  const [words, wanted] = [wordsOf(text), wordsOf(typed)];
  if (wanted.length === 0 || words.length === 0) return 0;
  if (words.join(' ') === wanted.join(' ')) return 1;
  let sum = 0;
  for (const part of wanted) {
    const best = Math.max(...words.map((word) => wordScore(word, part)));
    if (best === 0) return 0;
    sum += best;
  }
  return (sum / wanted.length) * 0.95;
}

/** Shortest word that may hold a slip; a shorter one would answer to everything. */
const leastForSlip = 4;

/** Plain small letters and figures, word by word: "Côte-d'Or 2" is cote, d, or, 2. */
export function wordsOf(text: string): string[] {
  return text.normalize('NFD').replace(/\p{M}/gu, '').toLowerCase().split(/[^\p{L}\p{N}]+/u).filter((word) => word !== '');
}

function wordScore(word: string, part: string): number {
  if (word === part) return 1;
  if (word.startsWith(part)) return 0.9;
  if (part.length >= 3 && word.includes(part)) return 0.6;
  if (part.length < leastForSlip) return 0;
  const beginnings = [part.length - 1, part.length, part.length + 1].map((length) => word.slice(0, length));
  return beginnings.some((beginning) => isOneEditAway(beginning, part)) ? 0.5 : 0;
}

function isOneEditAway(one: string, other: string): boolean {
  if (Math.abs(one.length - other.length) > 1) return false;
  let at = 0;
  while (at < one.length && at < other.length && one[at] === other[at]) at++;
  const [restOne, restOther] = [one.slice(at), other.slice(at)];
  if (restOne.slice(1) === restOther.slice(1) || restOne.slice(1) === restOther || restOne === restOther.slice(1)) return true;
  return restOne.slice(2) === restOther.slice(2) && restOne[0] === restOther[1] && restOne[1] === restOther[0];
}
