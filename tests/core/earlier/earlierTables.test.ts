import { describe, expect, it } from 'vitest';
import { readLabBytes } from '../../../server/importers/lab/readLabFile.ts';
import { understandEarlier } from '../../../shared/earlier/understand.ts';
import type { EarlierSurroundings, UnderstoodEarlier } from '../../../shared/earlier/earlierTable.ts';
import { convertAcidity } from '../../../shared/cellar/acidity.ts';
import { writeXlsx } from '../lab/writeXlsx.ts';
import { around, earlierBlock, pointOf } from './earlierBlocks.ts';

const south = earlierBlock('s', 'South Slope');
const far = earlierBlock('f', 'Block 7', 601_000, { plantedYear: 2015 });

async function understand(content: string | Uint8Array, where: EarlierSurroundings, answers: Record<string, string> = {}): Promise<UnderstoodEarlier> {
  const bytes = typeof content === 'string' ? new Uint8Array(Buffer.from(content, 'utf8')) : new Uint8Array(content);
  return understandEarlier(await readLabBytes(bytes), where, answers);
}
const open = ({ questions }: UnderstoodEarlier) => questions.filter(({ answer }) => answer === null).map(({ key }) => key);
const shown = ({ entries }: UnderstoodEarlier) => entries.map(({ blockId, rowLabel, vineNumber, measure, value, day }) => `${blockId} ${rowLabel}/${vineNumber} ${measure} ${Number(value.toFixed(2))} ${day}`);
const said = ({ words }: UnderstoodEarlier, code: string) => words.find((word) => word.code === code)?.params;
const refusals = ({ refused }: UnderstoodEarlier) => refused.map(({ line, code }) => `${line} ${code}`);

describe('tables of readings of earlier visits', () => {
  it('with row and vine are read as people of the block count, whatever the language of the titles', async () => {
    const table = 'Parcelle;Rang;Cep;Date;°Brix;pH;Poids grappe (g);Grappes/cep;Observations\nSouth slope;1;1;2024-09-03;22,4;3,41;118;31;sain\nblock_7;R02;40;2024-09-03;21,9;3,38;97;28;\n';
    const read = await understand(table, around(south, far));
    expect(open(read)).toEqual([]);
    expect(shown(read)).toEqual([
      's 1/1 brix 22.4 2024-09-03', 'f 2/40 brix 21.9 2024-09-03', 's 1/1 ph 3.41 2024-09-03', 'f 2/40 ph 3.38 2024-09-03',
      's 1/1 clusterWeight 118 2024-09-03', 'f 2/40 clusterWeight 97 2024-09-03', 's 1/1 clusterCount 31 2024-09-03', 'f 2/40 clusterCount 28 2024-09-03',
    ]);
    // Rows are counted from the east and vines from the far end here: row 1, vine 1 is the last row's last vine.
    expect(read.entries[0]).toMatchObject({ rowId: `s-${south.rows.length - 1}`, ordinal: south.rows.at(-1)!.vineCount, metres: null });
    expect(said(read, 'leftOutColumn')).toEqual({ title: 'Observations' });
  });

  it('with coordinates alone go to the nearest vine, and a line too far from any is refused by its number', async () => {
    const [near, between, lost] = [pointOf(south, 4, 7, 0.3), pointOf(far, 12, 20, -0.8), pointOf(south, 1, 1, 80)];
    const table = `lat,lon,date,brix\n${[near, between, lost].map(([lon, lat]) => `${lat},${lon},2025-03-05,23.1`).join('\n')}\n`;
    const read = await understand(table, around(south, far));
    expect(shown(read)).toEqual(['s 4/7 brix 23.1 2025-03-05', 'f 12/20 brix 23.1 2025-03-05']);
    expect(read.entries.map(({ metres }) => Number(metres!.toFixed(1)))).toEqual([0.3, 0.8]);
    expect(refusals(read)).toEqual(['4 tooFar']);
    expect(read.refused[0]!.params).toMatchObject({ reach: 5, block: 'South Slope' });
    const turned = await understand(table.replace('lat,lon', 'lon,lat'), around(south, far));
    expect([shown(turned), said(turned, 'axesTurned')]).toEqual([shown(read), {}]);
  });

  it('in metres of a map grid are asked about before they are placed', async () => {
    const table = 'Easting;Northing;Date;Brix\n600029;4270010;2025-09-01;23,1\n600031;4270012;2025-09-01;22,8\n';
    expect(open(await understand(table, around(south)))).toEqual(['reference']);
    expect((await understand(table, around(south), { reference: '32629' })).entries).toHaveLength(2);
  });

  it('whose row and vine do not agree with their coordinates are asked about, and agree where they do', async () => {
    const line = (row: number, vine: number, seen: [number, number]) => `${row},${vine},${pointOf(south, ...seen).map((part) => part.toFixed(7)).reverse().join(',')},2025-09-01,22.5`;
    const head = 'row,vine,latitude,longitude,date,brix\n';
    const agreed = await understand(`${head}${line(3, 5, [3, 5])}\n${line(9, 30, [9, 30])}\n`, around(south, far));
    expect([open(agreed), said(agreed, 'placesAgree')]).toEqual([[], { count: 2, metres: 0 }]);
    const table = `${head}${line(3, 5, [20, 35])}\n${line(9, 30, [25, 10])}\n`;
    const doubtful = await understand(table, around(south, far));
    expect([open(doubtful), doubtful.entries]).toEqual([['place'], []]);
    expect(shown(await understand(table, around(south, far), { place: 'coordinates' }))).toEqual(['s 20/35 brix 22.5 2025-09-01', 's 25/10 brix 22.5 2025-09-01']);
    expect(shown(await understand(table, around(south, far), { place: 'rows' }))).toEqual(['s 3/5 brix 22.5 2025-09-01', 's 9/30 brix 22.5 2025-09-01']);
  });

  it('of a block that was numbered anew are asked which numbers they mean', async () => {
    const anew = earlierBlock('n', 'Anew', 600_000, { wereCounted: 'low' });
    const table = 'row,vine,date,brix\n1,1,2025-09-01,22.5\n';
    expect(open(await understand(table, around(anew)))).toEqual(['numbering']);
    expect(shown(await understand(table, around(anew), { numbering: 'now' }))).toEqual(['n 1/1 brix 22.5 2025-09-01']);
    expect(shown(await understand(table, around(anew), { numbering: 'before' }))).toEqual([`n ${anew.rows.length}/1 brix 22.5 2025-09-01`]);
  });

  it('without a day or a block are asked for one, and for a block that the estate does not know', async () => {
    const table = 'Row\tVine\tBrix\n2\t3\t22.5\n';
    const first = await understand(table, around(south, far));
    expect([open(first), first.questions.find(({ key }) => key === 'day')!.choices]).toEqual([['day', 'block'], []]);
    expect(open(await understand(table, around(south, far), { block: 'f', day: '2027-01-01' }))).toEqual(['day']);
    expect(shown(await understand(table, around(south, far), { block: 'f', day: '2024-09-09' }))).toEqual(['f 2/3 brix 22.5 2024-09-09']);
    const named = 'Block,Row,Vine,Date,Brix\nOld Vines,2,3,2024-09-09,22.5\nSouth Slope,2,3,2024-09-09,22.1\n';
    expect(open(await understand(named, around(south, far)))).toEqual(['blockName:Old Vines']);
    expect(refusals(await understand(named, around(south, far), { 'blockName:Old Vines': 'leaveOut' }))).toEqual(['2 noBlock']);
  });

  it('say by line what cannot be used: no such vine, no day, a day to come, no figure', async () => {
    const table = 'row,vine,date,brix,ph\n99,1,2025-09-01,22,3.4\n1,500,2025-09-01,22,3.4\n1,1,31.02.2025,22,3.4\n1,2,2027-02-01,22,3.4\n1,3,2025-09-01,ripe,3.4\n,4,2025-09-01,22,3.4\n1,5,2025-09-01,,\n1,6,2025-09-01,n.d.,3.5\n';
    const read = await understand(table, around(south));
    expect(refusals(read)).toEqual(['2 noRow', '3 noVine', '4 noDay', '5 future', '6 cellUnread', '7 noPlace']);
    expect(read.refused[1]!.params).toEqual({ row: '1', block: 'South Slope', vine: '500', most: south.rows.at(-1)!.vineCount });
    expect(shown(read)).toEqual(['s 1/3 ph 3.4 2025-09-01', 's 1/6 ph 3.5 2025-09-01']);
    expect(said(read, 'emptyLines')).toEqual({ count: 1, lines: '8' });
  });

  it('keep what is unlikely and mark it, and take a reading that stands twice once', async () => {
    const table = 'block,row,vine,date,brix\nBlock 7,1,1,2025-09-01,22.5\nBlock 7,1,1,2025-09-01,22.5\nBlock 7,1,1,2025-09-01,22.9\nBlock 7,1,2,2025-09-01,48\nBlock 7,1,3,2012-09-01,21\n';
    const read = await understand(table, around(south, far));
    expect(shown(read)).toEqual(['f 1/1 brix 22.5 2025-09-01', 'f 1/1 brix 22.9 2025-09-01', 'f 1/2 brix 48 2025-09-01', 'f 1/3 brix 21 2012-09-01']);
    expect(read.entries.map(({ odd, isRepeat }) => [odd, isRepeat])).toEqual([[false, true], [false, true], [true, false], [true, false]]);
    expect(['twice', 'repeats', 'oddValues', 'beforePlanting'].map((code) => said(read, code)?.lines)).toEqual(['3', '2, 4', '5', '6']);
  });

  it('ask for units and the order of days that cannot be told, and convert by the answer', async () => {
    const table = 'Hilera;Cepa;Fecha;Azúcar;Acidez total\n1;1;03/09/2025;12,4;4,1\n1;2;04/09/2025;12,1;4,4\n';
    expect(open(await understand(table, around(south))).sort()).toEqual(['dateOrder', 'unit:Acidez total', 'unit:Azúcar']);
    const read = await understand(table, around(south), { dateOrder: 'dmy', 'unit:Azúcar': 'baume', 'unit:Acidez total': 'sulphuricGPerL' });
    expect([open(read), read.entries[0]!.day, read.entries[0]!.unitTyped]).toEqual([[], '2025-09-03', '°Bé']);
    // The trade's rule of thumb is 1.8 °Brix a °Baumé; sulphuric to tartaric acid is 150.09/98.08 by their molar masses.
    expect(Math.abs(read.entries[0]!.value - 1.8 * 12.4)).toBeLessThan(0.2);
    expect(read.entries[2]!.value).toBeCloseTo(convertAcidity(4.1, 'sulphuricGPerL', 'tartaricGPerL'), 6);
    expect(read.entries[2]!.value).toBeCloseTo((4.1 * 150.09) / 98.08, 2);
  });

  it('of a spreadsheet keep its dates and numbers, with lines above the table and a line with one result', async () => {
    const book = new Uint8Array(writeXlsx({ Visits: [['Ripening 2024', null, null, null, null], [], ['Row', 'Vine', 'Measure', 'Value', 'Date'], [1, 1, 'Brix', 22.5, '2024-09-01'], [1, 1, 'pH', 3.4, '2024-09-01'], [2, 1, 'Brix', 21.5, '2024-09-01']] }));
    const read = await understand(book, around(south));
    expect(shown(read).sort()).toEqual(['s 1/1 brix 22.5 2024-09-01', 's 1/1 ph 3.4 2024-09-01', 's 2/1 brix 21.5 2024-09-01']);
    expect(read.entries.map(({ line }) => line).sort()).toEqual([4, 5, 6]);
  });

  it('whose decimal commas divided the cells are refused line by line, never read from the wrong column', async () => {
    const read = await understand('row,vine,date,brix,ph\n1,1,2025-09-01,22,5,3,41\n1,2,2025-09-01,22,6,3,44\n', around(south));
    expect([shown(read), refusals(read)]).toEqual([[], ['2 tooWide', '3 tooWide']]);
  });

  it('without titles that tell the place ask for its columns', async () => {
    const table = 'A;B;Date;Brix\n1;1;2025-09-01;22,5\n2;5;2025-09-01;22,9\n';
    expect(open(await understand(table, around(south)))).toEqual(['placeBy']);
    expect(open(await understand(table, around(south), { placeBy: 'rows' }))).toEqual(['rowColumn', 'vineColumn']);
    expect(shown(await understand(table, around(south), { placeBy: 'rows', rowColumn: '0', vineColumn: '1' }))).toEqual(['s 1/1 brix 22.5 2025-09-01', 's 2/5 brix 22.9 2025-09-01']);
  });
});
