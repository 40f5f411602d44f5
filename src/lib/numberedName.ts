/** Longest name that a plan may have. */
const mostLetters = 80;

/** How a language puts a name and a number together. */
type Words = (name: string, number: string) => string;

/** The name of the next visit: visit 2 after a plan without a number, one more after a numbered one. */
export function nextVisitName(name: string, words: Words): string {
  return numbered(name, words, (written) => (written === null ? 2 : written + 1));
}

/** The name of a plan on a version of the zones, in place of the version that it may name by now. */
export function versionName(name: string, version: number, words: Words): string {
  return numbered(name, words, () => version);
}

/** `numberAfter`: the number that follows the one written at the end; that is null where the name ends in none. */
function numbered(name: string, words: Words, numberAfter: (written: number | null) => number): string {
  const mark = '\u0000';
  const [before, after] = words('', mark).split(mark) as [string, string];
  const isNumbered = name.endsWith(after) && name.lastIndexOf(before) > 0;
  const written = isNumbered ? name.slice(name.lastIndexOf(before) + before.length, name.length - after.length) : '';
  const isNumber = /^\d{1,4}$/u.test(written);
  const number = String(numberAfter(isNumber ? Number(written) : null));
  const first = isNumber ? name.slice(0, name.lastIndexOf(before)) : name;
  return words(first.slice(0, mostLetters - words('', number).length).trimEnd(), number);
}
