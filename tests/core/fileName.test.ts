import { describe, expect, it } from 'vitest';
import { fileName } from '../../server/exporters/fileName.ts';

describe('the name of a file', () => {
  it('is made of its parts', () => {
    expect(fileName(['Côte à l’Éperon', 'Été 2026', 'rows'], 'csv')).toBe('Côte à l’Éperon Été 2026 rows.csv');
  });

  it('holds nothing that a file system takes for something else', () => {
    expect(fileName(['../..\\a/b "q"', 'tab\tline\nnul\0'], 'zip')).toBe('--..-a-b -q- tab-line-nul-.zip');
    expect(fileName(['..', '...'], 'csv')).toBe('- ....csv');
    expect(fileName([' ', ''], 'csv')).toBe('-.csv');
    // Written from right to left, the ending of this one would read "csv".
    expect(fileName(['a\u202evsc'], 'exe')).toBe('a-vsc.exe');
  });

  it('keeps what tells the files of a block apart, however long its names are', () => {
    const [block, zoning] = ['日本'.repeat(40), `ñ${'Ä'.repeat(79)}`];
    const made = ['', 'rows', 'layers'].map((about) => fileName([block, zoning, ...(about === '' ? [] : [about])], 'geojson'));
    expect(new Set(made).size).toBe(3);
    expect(made[1]).toMatch(/Ä rows\.geojson$/);
    for (const name of made) expect(Buffer.byteLength(name)).toBeLessThan(200);
  });

  it('never ends a part within a character', () => {
    // Seven bytes from the limit, where a family of four takes 25 and each of its people 4.
    const name = fileName(['a'.repeat(73) + '👨‍👩‍👧‍👦'.repeat(2)], 'pdf');
    expect(name).toBe(`${'a'.repeat(73)}.pdf`);
    expect(() => encodeURIComponent(fileName([`a${'🍇'.repeat(39)}`, `b${'🍇'.repeat(39)}`], 'pdf'))).not.toThrow();
  });
});
