/** A value as keys are pressed: text, so that "1." and "0.50" stay as typed. */
export type Key = '0' | '1' | '2' | '3' | '4' | '5' | '6' | '7' | '8' | '9' | 'point' | 'back';

/** The text after a key. Decimals beyond the measure's own, a second point and an eighth figure change nothing. */
export function afterKey(text: string, key: Key, decimals: number): string {
  if (key === 'back') return text.slice(0, -1);
  if (key === 'point') return decimals === 0 || text.includes('.') ? text : `${text === '' ? '0' : text}.`;
  const [whole = '', part] = text.split('.');
  if (part !== undefined) return part.length >= decimals ? text : text + key;
  if (whole === '0') return key;
  return whole.length >= 7 ? text : text + key;
}

/** The number that stands there, or null while there is none. */
export function valueOf(text: string): number | null {
  return text === '' || text === '.' ? null : Number(text);
}

/** Whether a value is to be asked about: outside the plausible range, never refused. */
export function isOdd(value: number, { minimum, maximum }: { minimum: number; maximum: number }): boolean {
  return value < minimum || value > maximum;
}
