import { describe, expect, it } from 'vitest';
import type { DayStop, FieldMeasure, FieldRound, WalkStop } from '../../shared/contracts/rounds.ts';
import { crewSheet, type SheetPart } from '../../server/exporters/crewSheet.ts';
import { daySheet } from '../../server/exporters/daySheet.ts';
import { readPdf } from './pdfText.ts';

const measure = (code: string, measuredIn: 'field' | 'lab', unit = 'g'): FieldMeasure => ({ code, name: '', unit, decimals: 1, minimum: 0, maximum: 100, margin: 1, marginKind: 'absolute', confidence: 0.95, skewed: false, measuredIn });
const measures = [measure('clusterCount', 'field', 'clusters'), measure('brix', 'lab', '°Brix'), measure('ph', 'lab', 'pH'), measure('clusterWeight', 'field'), measure('berryWeight', 'field')];
const stop = (number: number, asked: string[]): WalkStop => ({
  targetId: `t${number}`, number, rowId: 'r3', rowLabel: '3', rowLabelWas: null, ordinal: number, vineNumber: number, zone: 1, drawOrder: number, enterBy: 'start', heading: 'toEnd', ahead: number, aheadFrom: 'entry', opensZone: number === 1, measures: asked,
  reserve: { rowId: 'r3', rowLabel: '3', ordinal: number + 40, vineNumber: number + 40 },
});
function round(stops: WalkStop[], asked = measures): FieldRound {
  return {
    id: '', planId: '', planName: 'Plan', blockId: '', blockName: 'Marl', estateName: 'Estate', onDate: '2026-08-20', state: 'sent', gate: 'North gate', notes: '', startPostColour: 'red', endPostColour: 'blue', vineOneEnd: 'start',
    people: [], zones: [{ number: 1, name: 'Upper + Lower', colour: null, vines: 100, targets: stops.length }], measures: asked,
    rows: [{ id: 'r3', label: '3', firstOrdinal: 1, vineCount: 100, runs: [{ zone: 1, from: 1, to: 100 }], known: [], ends: null }],
    stops, others: [], received: [], doneTargetIds: [], safety: { emergencyNumber: '112', meetingPoint: 'Press yard' }, restrictions: [], lifters: [], checkedAt: '2026-08-20T04:10:00Z', day: [], acknowledgedAt: null,
  };
}
const stopOfDay = (roundId: string, block: string, place: number | null): DayStop => ({ roundId, block, gate: '', vines: 48, place, wayS: place !== null && place > 1 ? 360 : null, workS: 5400 });
const options = { paper: 'a4' as const, link: 'https://example.org/r', timeZone: 'Europe/Paris' };
const pagesOf = async (part: Partial<SheetPart> & { round: FieldRound }, paper: 'a4' | 'letter' = 'a4') => readPdf(await crewSheet([{ person: 'Nia Holt', language: 'en', ...part }], { ...options, paper }));
/** Boxes to write in are as high as a line; the strip's squares are filled, not drawn round. */
const boxesOf = (pages: Awaited<ReturnType<typeof pagesOf>>) => pages.flatMap(({ boxes }) => boxes.filter(({ height }) => height === 25));

describe('the crew sheet', () => {
  it('has a box for every measure that a vine is asked for, however many, wide enough for a hand', async () => {
    const pages = await pagesOf({ round: round([stop(1, ['clusterWeight']), stop(2, measures.map(({ code }) => code)), stop(3, ['brix'])]) });
    const boxes = boxesOf(pages);
    // Vine 1 its weight; vine 2 three at the vine and one for the bag's label; vine 3 the bag alone.
    expect(boxes).toHaveLength(1 + 4 + 1);
    expect(Math.min(...boxes.map(({ width }) => width))).toBeGreaterThanOrEqual(36);
    expect(pages[0]!.texts.join(' ')).toContain('Bag: °Brix, pH');
    // A unit is left out where the name is the unit, not where its letter happens to be in the name.
    expect(pages[0]!.texts.join(' ')).toContain('weight, g');
  });

  it('cuts no unit off in the language with the longest words', async () => {
    const asked = measures.filter(({ code }) => ['clusterCount', 'clusterWeight', 'brix'].includes(code));
    for (const paper of ['a4', 'letter'] as const) {
      const words = (await pagesOf({ language: 'it', round: round([stop(1, ['clusterWeight', 'brix'])], asked) }, paper)).flatMap(({ texts }) => texts).join(' ');
      expect(words, paper).toMatch(/Peso del\s+grappolo,\s+g/u);
      expect(words).not.toContain('…');
    }
  });

  it('numbers each walked row under the strip where the numbers do not touch, and names no start that nobody gave', async () => {
    const rows = Array.from({ length: 60 }, (_, i) => ({ id: `r${i + 1}`, label: String(i + 1), firstOrdinal: 1, vineCount: 100, runs: [{ zone: 1, from: 1, to: 100 }], known: [], ends: null }));
    const walked = [46, 42, 7].map((row, i) => ({ ...stop(i + 1, ['clusterCount']), rowId: `r${row}`, rowLabel: String(row), vineNumber: 80, ordinal: 80, reserve: null }));
    const [page] = await pagesOf({ round: { ...round(walked), rows, gate: '' } });
    // Once under the strip and once in the table.
    for (const row of ['46', '42', '7']) expect(page!.texts.filter((text) => text === row), row).toHaveLength(2);
    expect(page!.texts.join(' ')).not.toContain('Start');
  });

  it('turns to the long side where the boxes would grow narrow, and stays upright where they do not', async () => {
    const many = Array.from({ length: 7 }, (_, i) => measure(`own${i}`, 'field'));
    const [wide] = await pagesOf({ round: round([stop(1, ['own6'])], many) });
    expect(wide!.width).toBeGreaterThan(wide!.height);
    const [upright] = await pagesOf({ round: round([stop(1, ['clusterCount'])], measures.slice(0, 2)) }, 'letter');
    expect([upright!.width, upright!.height]).toEqual([612, 792]);
  });

  it('lets lab figures be written where nothing is read at the vine', async () => {
    const pages = await pagesOf({ round: round([stop(1, ['brix', 'ph'])], measures.slice(1, 3)) });
    expect(boxesOf(pages)).toHaveLength(3);
  });

  it('stays inside the paper, every page named and numbered', async () => {
    const pages = await pagesOf({ round: round(Array.from({ length: 40 }, (_, i) => stop(i + 1, ['clusterCount', 'brix']))) });
    expect(pages.length).toBeGreaterThan(1);
    pages.forEach(({ texts, boxes, width }, index) => {
      expect(texts).toContain(`Marl, Nia Holt. Page ${index + 1}`);
      for (const box of boxes) expect(box.x >= 36 && box.x + box.width <= width - 36 + 0.01).toBe(true);
    });
    expect(boxesOf(pages)).toHaveLength(80);
  });

  it('shows every restriction of the estate’s own day, whatever the hour, and when it was looked for', async () => {
    const rule = (startsAt: string, endsAt: string, product: string) => ({ id: product, blockId: '', blockName: 'Marl', rowIds: null, startsAt, endsAt, product, labelInterval: '12 h, until dry', noPickBefore: null, note: '', setBy: 'Mara Thorn', lifted: null, pickChanges: [], inForce: true });
    const restrictions = [rule('2026-08-19T14:00:00Z', '2026-08-20T06:00:00Z', 'Sulphur'), rule('2026-08-20T15:00:00Z', '2026-08-21T15:00:00Z', 'Copper'), rule('2026-08-20T22:30:00Z', '2026-08-21T09:00:00Z', 'Tomorrow’s')];
    const words = async (timeZone: string, rules: typeof restrictions) => readPdf(await crewSheet([{ person: 'Nia Holt', language: 'en', round: { ...round([stop(1, ['clusterCount'])]), restrictions: rules } }], { ...options, timeZone })).flatMap(({ texts }) => texts).join(' ');
    const paris = await words('Europe/Paris', restrictions);
    // Neither is in force at noon; both are in force within that day in Paris. The third begins after its midnight.
    expect(paris).toMatch(/DO NOT ENTER until Thu,? 20 Aug,? (at )?08:00 .*Sulphur, Mara Thorn/u);
    expect(paris).toContain('Copper, Mara Thorn; 12 h, until dry');
    expect(paris).toMatch(/As recorded \w+,? \d+ \w+,? (at )?\d\d:\d\d\. The product label/u);
    expect(paris).not.toContain('Tomorrow');
    expect(paris).not.toContain('No restriction recorded');
    // In New Zealand that day is over at noon by UTC.
    expect(await words('Pacific/Auckland', restrictions.slice(1, 2))).toMatch(/No restriction recorded.*\(Thu,? 20 Aug,? (at )?16:10\)/u);
    expect(await words('Pacific/Auckland', restrictions.slice(0, 1))).toContain('Sulphur');
  });

  it('speaks the language of its person, names post colours, zones sampled as one, safety, and what else the day holds', async () => {
    const english = (await pagesOf({ round: { ...round([stop(1, ['clusterCount'])]), id: 'here', day: [stopOfDay('here', 'Marl', null), stopOfDay('r2', 'Millrace', null)] } })).flatMap(({ texts }) => texts).join(' ');
    expect(english).toMatch(/Thursday,? 20 August 2026/u);
    for (const words of ['RED', 'BLUE', 'Zone 1 (Upper + Lower): 1', 'Emergency: 112', 'Meeting point: Press yard', 'Also today: Millrace, 48 vines', 'No restriction recorded']) expect(english).toContain(words);
    const spanish = (await pagesOf({ round: round([stop(1, ['clusterCount'])]), language: 'es' })).flatMap(({ texts }) => texts).join(' ');
    for (const words of ['jueves, 20 de agosto de 2026', 'ROJO', 'Hilera', 'Punto de encuentro']) expect(spanish).toContain(words);
  });

  it('gives the order of a day over several blocks, this one marked, with the ways between them', async () => {
    const day = [stopOfDay('r1', 'Millrace', 1), stopOfDay('here', 'Marl', 2), stopOfDay('r3', 'Church Piece', 3)];
    const english = (await pagesOf({ round: { ...round([stop(1, ['clusterCount'])]), id: 'here', day } })).flatMap(({ texts }) => texts).join(' ').replaceAll(/\s+/g, ' ');
    expect(english).toContain('Order today: 1 Millrace, 48 vines; 2 Marl, this sheet (6 min); 3 Church Piece, 48 vines (6 min)');
    expect(english).not.toContain('Also today');
  });
});

describe('the page of a day', () => {
  it('gives each person the blocks in order, with ways, work and when each is done, on A4 and Letter', async () => {
    const stops = [{ ...stopOfDay('r1', 'Millrace', 1), closed: null }, { ...stopOfDay('r2', 'Marl', 2), closed: 'DO NOT ENTER until Thu 20 Aug, 18:00 (Sulphur).' }];
    const body = (paper: 'a4' | 'letter') => daySheet([{ person: 'Nia Holt', language: 'en', stops }, { person: 'Teo Marsh', language: 'fr', stops: stops.slice(0, 1) }], { paper, estateName: 'Estate', onDate: '2026-08-20', meetingPoint: 'Press yard', emergencyNumber: '112', at: new Date('2026-08-19T08:00:00Z') });
    const pages = await readPdf(await body('a4'));
    expect(pages).toHaveLength(2);
    const [nia, teo] = pages.map(({ texts }) => texts.join(' ').replaceAll(/\s+/g, ' '));
    // 90 minutes; then 6 on the way and 90 more.
    for (const words of ['Nia Holt', 'Thursday', '1 Millrace 48 vines, 1 h 30 min. Done after 1 h 30 min', 'On the way 6 min', '2 Marl 48 vines, 1 h 30 min. Done after 3 h 06 min', 'DO NOT ENTER until Thu 20 Aug, 18:00 (Sulphur)', 'Emergency: 112']) expect(nia).toContain(words);
    for (const words of ['Teo Marsh', 'jeudi', 'ceps', 'Urgence: 112']) expect(teo).toContain(words);
    const [letter] = await readPdf(await body('letter'));
    expect([letter!.width, letter!.height]).toEqual([612, 792]);
  });
});
