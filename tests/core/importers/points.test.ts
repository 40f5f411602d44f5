import { describe, expect, it } from 'vitest';
import { cellNumber, columnMark, findDecimalMark } from '../../../shared/importing/cellNumbers.ts';
import { readAngle } from '../../../shared/importing/degrees.ts';
import { readPoints } from '../../../server/importers/points/readPoints.ts';
import { text } from './corpus.ts';

const read = (words: string, answers = {}) => readPoints(text(words), { fileName: 'ec.csv', answers });

describe('numbers in cells', () => {
  it.each([
    ['12.5', '.', 12.5, ''],
    ['12,5', ',', 12.5, ''],
    ['1.234,56', ',', 1234.56, ''],
    ['1,234.56', '.', 1234.56, ''],
    ['−3', '.', -3, ''],
    ['1e-3', '.', 0.001, ''],
    ['5 mS/m', '.', 5, 'mS/m'],
    ['12,5%', ',', 12.5, '%'],
    ['', '.', NaN, ''],
    ['error', '.', NaN, ''],
    ['=1+1', '.', NaN, ''],
    ['0', '.', 0, ''],
    // A comma before other than three digits is a decimal in any table; thousands are parted by apostrophes and thin spaces too.
    ['12,5', '.', 12.5, ''],
    ['44,7031', '.', 44.7031, ''],
    ["4'950'010.2", '.', 4950010.2, ''],
    ['4\u202f950\u00a0010,2', ',', 4950010.2, ''],
    ['-7.25', '.', -7.25, ''],
    ['1.234', '.', 1.234, ''],
    ['1.234', ',', 1234, ''],
    ['12.5', ',', 12.5, ''],
    ['1,234', '.', 1234, ''],
  ] as const)('"%s" with mark "%s" is %f', (cell, mark, value, unit) => {
    expect(cellNumber(cell, mark)).toEqual({ value, unit });
  });

  it('commas are decimals when nothing else can be meant, and asked about when thousands could be', () => {
    expect(findDecimalMark(['12,5', '3,25'], ';')).toEqual({ mark: ',', unsure: false });
    expect(findDecimalMark(['1,234', '2,345'], ';')).toEqual({ mark: ',', unsure: true });
    expect(findDecimalMark(['12.5', '1,234'], ';')).toEqual({ mark: '.', unsure: false });
    expect(findDecimalMark(['1.234,5'], ';')).toEqual({ mark: ',', unsure: false });
  });
});

describe('a table that mixes decimal marks', () => {
  it('is read column by column', async () => {
    // Three columns with commas outvote two with points: 3.001 is no three thousand and one.
    const rows = Array.from({ length: 6 }, (_, row) => `44.703${row};3.00${row + 1};${10 + row},5;${row},25;7,1${row}`);
    const { pointsLonLat, numbers } = await read(['lat;lon;ec;top;deep', ...rows].join('\n'));
    expect(pointsLonLat[0]).toEqual([3.001, 44.703]);
    expect([...numbers.get('ec')!]).toEqual([10.5, 11.5, 12.5, 13.5, 14.5, 15.5]);
    expect(numbers.get('top')![1]).toBe(1.25);
  });

  it('leaves a column that does not tell to the rest of the table', () => {
    expect(columnMark(['1.234', '2.345'], ',')).toBe(',');
    expect(columnMark(['1.234', '2.34'], ',')).toBe('.');
    expect(columnMark(['12,5', '1.25'], '.')).toBe('.');
  });

  it('takes what instruments write for nothing as missing, not as words', async () => {
    const { numbers } = await read('lat,lon,ec\n44.7031,3.0011,NaN\n44.7032,3.0012,12\n44.7033,3.0013,#N/A\n44.7034,3.0014,null\n44.7035,3.0015,-inf\n44.7036,3.0016,13\n');
    expect([...numbers.get('ec')!]).toEqual([NaN, 12, NaN, NaN, NaN, 13]);
  });

  it('does not offer as numbers what holds none', async () => {
    const { columns, numbers } = await read('lat,lon,mixed\n44.7031,3.0011,1.5.2\n44.7032,3.0012,2\n44.7033,3.0013,a\n');
    expect(numbers.has('mixed')).toBe(false);
    expect(columns.find(({ name }) => name === 'mixed')!.kind).toBe('text');
  });
});

describe('positions of a receiver', () => {
  it('packed as degrees and minutes are unpacked, with the letters beside them', async () => {
    // 44° 42.186' = 44 + 42.186 / 60 = 44.7031; 3° 0.066' = 3.0011.
    const { pointsLonLat, warnings } = await read('lat,ns,lon,ew,ec\n4442.186,N,00300.066,E,5\n4442.192,N,00300.072,E,6\n');
    expect(pointsLonLat[0]![0]).toBeCloseTo(3.0011, 9);
    expect(pointsLonLat[0]![1]).toBeCloseTo(44.7031, 9);
    expect(warnings.map(({ code }) => code)).toContain('degrees-minutes');
    const south = await read('lat,ns,lon,ew,ec\n3334.5,S,07052.2,W,5\n3334.6,S,07052.3,W,6\n');
    expect(south.pointsLonLat[0]![0]).toBeCloseTo(-(70 + 52.2 / 60), 9);
    expect(south.pointsLonLat[0]![1]).toBeCloseTo(-(33 + 34.5 / 60), 9);
  });
});

describe('a column of values', () => {
  it('is one of numbers with decimal commas, units in its cells or a word among many, so that it can be chosen', async () => {
    const rows = Array.from({ length: 12 }, (_, row) => `43,10${row};2,41${row};${20 + row},5;${row} mS/m;${row === 3 ? 'error' : row};block ${row}`);
    const understood = await read(['lat;lon;EC;deep;top;name', ...rows].join('\n'));
    expect(understood.columns.map(({ name, kind }) => [name, kind])).toEqual([['lat', 'number'], ['lon', 'number'], ['EC', 'number'], ['deep', 'number'], ['top', 'number'], ['name', 'text']]);
    expect([...understood.numbers.keys()]).toEqual(['EC', 'deep', 'top']);
  });
});

describe('angles', () => {
  // 44° 50' 12.3" = 44 + 50/60 + 12.3/3600 = 44.83675; 44° 50.205' is the same.
  it.each([
    ['44.83675', 44.83675, null, false],
    ['N44.83675', 44.83675, 'lat', false],
    ['44°50\'12.3"N', 44.83675, 'lat', true],
    ['44° 50′ 12.3″ S', -44.83675, 'lat', true],
    ["44°50.205'", 44.83675, null, true],
    ['44 50 12.3 N', 44.83675, 'lat', true],
    ['44:50:12.3', 44.83675, null, true],
    ['-0 24 36', -0.41, null, true],
    ['0°24\'36"W', -0.41, 'lon', true],
    ['0°24\'36"O', -0.41, 'lon', true],
    ['44°70\'00"N', NaN, 'lat', true],
    ['north', NaN, null, false],
  ] as const)('%s', (cell, degrees, axis, isSexagesimal) => {
    const angle = readAngle(cell, '.');
    expect(angle.axis).toBe(axis);
    expect(angle.isSexagesimal).toBe(isSexagesimal);
    if (Number.isNaN(degrees)) expect(angle.degrees).toBeNaN();
    else expect(angle.degrees).toBeCloseTo(degrees, 9);
  });
});

describe('tables', () => {
  it('gives positions, numbers with NaN for missing, texts, and the row of each in the file', async () => {
    const points = await read('id;Breite;Länge;EC;note\r\n1;44,8366;0,4100;12,5;wet\r\n2;;0,4;1;x\r\n3;44,8368;0,4102;;\r\n');
    expect(points.pointsLonLat).toEqual([[0.41, 44.8366], [0.4102, 44.8368]]);
    expect([...points.numbers.get('EC')!]).toEqual([12.5, NaN]);
    expect(points.texts.get('note')).toEqual(['wet', '']);
    expect(points.rowNumbers).toEqual([2, 4]);
    expect(points.setAside).toEqual([{ reason: 'no position', count: 1, rows: [3] }]);
    expect(points).toMatchObject({ separator: ';', decimalMark: ',', encoding: 'UTF-8', epsg: 4326, position: { first: 'Länge', second: 'Breite', frame: 'lonlat' } });
  });

  it('counts rows set aside by reason', async () => {
    const points = await read('lat,lon,ec\n44.7,3,1\n,,2\n0,0,3\n44.7,east,4\n44.7\n44.8,3,5,6\n');
    expect(points.setAside.map(({ reason, count }) => [reason, count])).toEqual([['no position', 1], ['position is 0, 0', 1], ['position is not a number', 1], ['too few cells', 1], ['too many cells', 1]]);
  });

  it('a zero is a value', async () => {
    const points = await read('lat,lon,ec\n44.7,3,0\n44.8,3,5\n');
    expect([...points.numbers.get('ec')!]).toEqual([0, 5]);
    expect((await read('lat,lon,ec\n51.5,0,1\n51.6,0,2\n')).pointsLonLat).toEqual([[0, 51.5], [0, 51.6]]);
  });

  it('metres are placed only after the question is answered', async () => {
    const words = 'E;N;ec\n500010,5;4950010,2;5\n500020;4950020;6\n';
    expect((await read(words)).pointsLonLat).toEqual([]);
    const points = await read(words, { epsg: 32631 });
    // Easting 500010.5 lies 10.5 m east of the meridian of 3°: 10.5 / (0.9996 · 78,846 m a degree at 44.7° N) = 0.000132°.
    expect(points.pointsLonLat[0]![0]).toBeCloseTo(3 + 0.0001326, 5);
    expect(points.pointsLonLat[0]![1]).toBeCloseTo(44.7033, 3);
  });
});

describe('a table that tells vines by row and number', () => {
  it.each([
    ['Parcelle;Rang;Cep;Date;Bois de taille (kg)\nClos;1;3;03/02/2019;0,62\n', true],
    ['Block,Row,Vine,Brix\nOak,12,4,21.5\n', true],
    ['id,a,b\n1,44.7,3.0\n', false],
  ])('is pointed to the screen for readings: %s', async (words, isReadings) => {
    const { warnings, questions } = await read(words);
    expect(warnings.some(({ code }) => code === 'rows-and-vines')).toBe(isReadings);
    expect(questions.map(({ code }) => code)).toContain('columns');
  });

  it('is pointed there too when it has too few numbers for positions', async () => {
    await expect(read('row,vine,variety\nA,B,Merlot\n')).rejects.toThrow(/Earlier readings/);
  });
});
