/** Longest name of a field that an answer can carry. */
const longest = 300;
const unusable = /\0|\p{Surrogate}/gu;

/** A field's name as it can be kept and answered with: no NUL, no half letters, not endless. */
export function usableName(name: string): string {
  return name.replace(unusable, '').slice(0, longest);
}

/** Properties under usable names; the same object where all of them are. Of names that become the same, the last counts. */
export function withUsableNames(properties: Readonly<Record<string, unknown>>): Readonly<Record<string, unknown>> {
  const names = Object.keys(properties);
  if (names.every((name) => usableName(name) === name)) return properties;
  return Object.fromEntries(names.map((name) => [usableName(name), properties[name]]));
}
