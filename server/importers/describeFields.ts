import type { FieldUnderstood } from './understood.ts';

type Value = unknown;

/** Kind, examples and counts of one attribute over all its values. */
export function describeField(name: string, values: readonly Value[]): FieldUnderstood {
  const present = values.filter((value) => value !== null && value !== undefined && value !== '');
  const distinct = new Set(present.map(shown));
  return {
    name,
    kind: kindOf(present),
    examples: [...distinct].slice(0, 5).map((text) => (text.length > 60 ? `${text.slice(0, 59)}…` : text)),
    distinct: distinct.size,
    missing: values.length - present.length,
  };
}

function kindOf(values: readonly Value[]): FieldUnderstood['kind'] {
  if (values.length === 0) return 'empty';
  if (values.every((value) => typeof value === 'number')) return 'number';
  if (values.every((value) => typeof value === 'boolean')) return 'boolean';
  const texts = values.map(String);
  if (texts.every((text) => /^\d{4}-\d\d-\d\d/.test(text))) return 'date';
  return texts.every((text) => /^[+-]?(\d+[.,]?\d*|[.,]\d+)(e[+-]?\d+)?$/i.test(text.trim())) ? 'number' : 'text';
}

function shown(value: Value): string {
  return typeof value === 'object' ? JSON.stringify(value).slice(0, 100) : String(value);
}
