/** Longest name that a plan may have. */
const mostLetters = 80;

/** The name of the next visit: visit 2 after a plan without a number, one more after a numbered one. `words` puts a name and a number together. */
export function nextVisitName(name: string, words: (name: string, visit: string) => string): string {
  const mark = '\u0000';
  const [before, after] = words('', mark).split(mark) as [string, string];
  const isNumbered = name.endsWith(after) && name.lastIndexOf(before) > 0;
  const written = isNumbered ? name.slice(name.lastIndexOf(before) + before.length, name.length - after.length) : '';
  const isVisit = /^\d{1,4}$/u.test(written);
  const visit = isVisit ? Number(written) + 1 : 2;
  const first = isVisit ? name.slice(0, name.lastIndexOf(before)) : name;
  const suffix = words('', String(visit)).length;
  return words(first.slice(0, mostLetters - suffix).trimEnd(), String(visit));
}
