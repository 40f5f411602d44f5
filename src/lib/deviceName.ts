// Browsers name themselves with the names of their forebears: the first that fits is the real one.
const browsers: readonly (readonly [RegExp, string])[] = [
  [/Edg(e|A|iOS)?\//, 'Edge'], [/OPR\/|Opera/, 'Opera'], [/SamsungBrowser\//, 'Samsung Internet'], [/Firefox\/|FxiOS\//, 'Firefox'], [/HeadlessChrome\/|Chrome\/|CriOS\//, 'Chrome'], [/Safari\//, 'Safari'],
];
const systems: readonly (readonly [RegExp, string])[] = [[/iPhone|iPad|iPod/, 'iOS'], [/Android/, 'Android'], [/Windows/, 'Windows'], [/Mac OS X|Macintosh/, 'macOS'], [/CrOS/, 'ChromeOS'], [/Linux|X11/, 'Linux']];

/** Browser and system as a person calls them, from the line a browser sends; null where it does not say. */
export function deviceFrom(userAgent: string): { browser: string | null; system: string | null } {
  const nameIn = (table: readonly (readonly [RegExp, string])[]) => table.find(([pattern]) => pattern.test(userAgent))?.[1] ?? null;
  return { browser: nameIn(browsers), system: nameIn(systems) };
}
