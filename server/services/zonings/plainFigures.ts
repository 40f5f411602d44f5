/** A record as JSON keeps it: figures that have no meaning (NaN, infinite) become null. */
export function plainFigures<Value>(value: Value): Value {
  return JSON.parse(JSON.stringify(value, (_key, inner: unknown) => (typeof inner === 'number' && !Number.isFinite(inner) ? null : inner))) as Value;
}
