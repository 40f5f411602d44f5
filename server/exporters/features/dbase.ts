import { cutText } from '../cutText.ts';
import type { CutText } from './cutNotes.ts';
import type { FeatureField, FeatureLayer } from './featureLayer.ts';

/** A text field holds at most so many bytes. */
const mostBytes = 254;

interface Column {
  readonly name: string;
  readonly type: 'C' | 'N';
  readonly decimals: number;
  readonly width: number;
  readonly values: readonly string[];
  readonly cut: readonly CutText[];
}

/** The table of a shapefile, dBASE III: names in capitals, texts as wide as the longest of them, numbers right-aligned, nothing as blanks. With the texts that no field holds. */
export function attributeFile({ fields, features }: FeatureLayer): { bytes: Buffer; cut: CutText[] } {
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
  return { bytes: Buffer.concat([head, ...records, Buffer.from([0x1a])]), cut: columns.flatMap(({ cut }) => cut) };
}

function columnOf({ name, type, decimals = 0 }: FeatureField, values: readonly (string | number | null)[]): Column {
  const column = name.toUpperCase();
  const wholes = values.map((value) => (value === null ? '' : typeof value === 'number' ? value.toFixed(decimals) : value));
  const texts = wholes.map((whole) => cutText(whole, mostBytes));
  const cut = wholes.flatMap((whole, at) => (texts[at] === whole ? [] : [{ line: at + 1, column, whole }]));
  return { name: column, type: type === 'text' ? 'C' : 'N', decimals, values: texts, cut, width: Math.max(1, ...texts.map((text) => Buffer.byteLength(text))) };
}

function padded({ type, width }: Column, value: string): Buffer {
  const bytes = Buffer.from(value, 'utf8');
  const gap = Buffer.alloc(width - bytes.length, ' ');
  return type === 'N' ? Buffer.concat([gap, bytes]) : Buffer.concat([bytes, gap]);
}
