import { strFromU8, unzipSync } from 'fflate';
import { describe, expect, it } from 'vitest';
import { cutText } from '../../server/exporters/cutText.ts';
import type { FeatureLayer } from '../../server/exporters/features/featureLayer.ts';
import { shapefileOf } from '../../server/exporters/features/shapefile.ts';

const layer = (...names: string[]): FeatureLayer => ({
  name: 'zones',
  title: 'Zones',
  madeAt: new Date('2026-09-01T00:00:00Z'),
  fields: [{ name: 'zone', type: 'integer' }, { name: 'name', type: 'text' }],
  features: names.map((name, at) => ({ values: [at + 1, name], shape: { kind: 'point', at: [4, 44] } })),
});
/** Text of a record behind the mark of deletion and the figure of the zone. */
const nameIn = (dbf: Uint8Array, line: number): string => {
  const bytes = Buffer.from(dbf);
  const [head, record] = [bytes.readUInt16LE(8), bytes.readUInt16LE(10)];
  return bytes.subarray(head + line * record + 2, head + (line + 1) * record).toString('utf8').trimEnd();
};

describe('a text that no field of a shapefile holds', () => {
  const long = `${'日本'.repeat(42)}👨‍👩‍👧‍👦 the end`;

  it('is cut between characters as people see them', () => {
    const table = unzipSync(shapefileOf(layer('Bank', long), 'en'))['zones.dbf']!;
    expect(nameIn(table, 0)).toBe('Bank');
    // 84 signs of three bytes, and no part of the family of four that would follow.
    expect(nameIn(table, 1)).toBe('日本'.repeat(42));
  });

  it('stands whole in a file beside it, in the language of who takes it away', () => {
    const files = unzipSync(shapefileOf(layer('Bank', long), 'it'));
    expect(Object.keys(files).sort()).toEqual(['zones.cpg', 'zones.dbf', 'zones.prj', 'zones.shp', 'zones.shx', 'zones.txt']);
    expect(strFromU8(files['zones.txt']!)).toMatch(/254 byte di testo/);
    expect(strFromU8(files['zones.txt']!)).toContain(`riga 2, NAME: ${long}\r\n`);
    expect(strFromU8(files['zones.txt']!)).not.toContain('Bank');
  });

  it('is nothing to speak of where all fit', () => {
    expect(Object.keys(unzipSync(shapefileOf(layer('Bank', 'x'.repeat(254)), 'en')))).not.toContain('zones.txt');
  });
});

it('cuts no text that fits, and keeps nothing of a character that does not', () => {
  expect(cutText('Bank', 4)).toBe('Bank');
  expect(cutText('Bänk', 2)).toBe('B');
  expect(cutText('🍇', 3)).toBe('');
});
