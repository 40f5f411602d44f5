import type { FeatureField, FeatureLayer } from './featureLayer.ts';

/** A text field holds at most so many bytes. */
const mostBytes = 254;

interface Column {
  readonly name: string;
  readonly type: 'C' | 'N';
  readonly decimals: number;
  readonly width: number;
  readonly values: readonly string[];
}

/** The table of a shapefile, dBASE III: names in capitals, texts as wide as the longest of them, numbers right-aligned, nothing as blanks. */
export function attributeFile({ fields, features }: FeatureLayer): Buffer {
  const columns = fields.map((field, at) => columnOf(field, features.map(({ values }) => values[at] ?? null)));
  const recordBytes = 1 + columns.reduce((sum, { width }) => sum + width, 0);
  const head = Buffer.alloc(32 + columns.length * 32 + 1);
  head[0] = 3;
  head[1] = 100;
  head[2] = 1;
  head[3] = 1;
  head.writeUInt32LE(features.length, 4);
  head.writeUInt16LE(head.length, 8);
  head.writeUInt16LE(recordBytes, 10);
  columns.forEach(({ name, type, width, decimals }, index) => {
    const at = 32 + index * 32;
    head.write(name, at, 'latin1');
    head.write(type, at + 11, 'latin1');
    head[at + 16] = width;
    head[at + 17] = decimals;
  });
  head[head.length - 1] = 0x0d;
  const records = features.map((_feature, index) => Buffer.concat([Buffer.from(' '), ...columns.map((column) => padded(column, column.values[index]!))]));
  return Buffer.concat([head, ...records, Buffer.from([0x1a])]);
}

function columnOf({ name, type, decimals = 0 }: FeatureField, values: readonly (string | number | null)[]): Column {
  const texts = values.map((value) => (value === null ? '' : shortened(typeof value === 'number' ? value.toFixed(decimals) : value)));
  return { name: name.toUpperCase(), type: type === 'text' ? 'C' : 'N', decimals, values: texts, width: Math.max(1, ...texts.map((text) => Buffer.byteLength(text))) };
}

/** At most so many bytes as a field holds, never half a character. */
function shortened(value: string): string {
  let text = value;
  while (Buffer.byteLength(text) > mostBytes) text = [...text].slice(0, -1).join('');
  return text;
}

function padded({ type, width }: Column, value: string): Buffer {
  const bytes = Buffer.from(value, 'utf8');
  const gap = Buffer.alloc(width - bytes.length, ' ');
  return type === 'N' ? Buffer.concat([gap, bytes]) : Buffer.concat([bytes, gap]);
}
