/**
 * A value as PostgreSQL's jsonb and text accept it: without the character NUL and without halves of surrogate pairs,
 * which files may well hold in their names and fields.
 */
export function storable<Value>(value: Value): Value {
  return clean(value) as Value;
}

function clean(value: unknown): unknown {
  if (typeof value === 'string') return storableText(value);
  if (Array.isArray(value)) return value.map(clean);
  if (typeof value !== 'object' || value === null || value instanceof Date) return value;
  return Object.fromEntries(Object.entries(value).map(([key, inner]) => [storableText(key), clean(inner)]));
}

function storableText(text: string): string {
  // A lone surrogate is one that no neighbour completes; the pattern with the u flag matches only those.
  return text.replaceAll('\u0000', '').replace(/\p{Surrogate}/gu, '\ufffd');
}
