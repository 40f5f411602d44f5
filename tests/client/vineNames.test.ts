import { describe, expect, it } from 'vitest';
import PaperLines from '../../src/components/field/PaperLines.vue';
import ConflictCard from '../../src/components/field/ConflictCard.vue';
import { emptyDraft } from '../../src/components/field/paperDraft.ts';
import { findingEntry, photoEntry } from '../../src/offline/newEntry.ts';
import { proposedVines } from '../../src/lib/stripRows.ts';
import type { ConflictCard as Card } from '../../shared/contracts/conflicts.ts';
import type { FieldRound } from '../../shared/contracts/rounds.ts';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

const [vine, spare] = [[3.1, 43.25] as [number, number], [3.1001, 43.2502] as [number, number]];
const stop = { targetId: 't', number: 1, rowId: 'r', rowLabel: '4', ordinal: 7, vineNumber: 7, measures: ['clusterCount'] };
const roundOf = (place?: [number, number]) => ({
  id: 'round', blockId: 'b', received: [], measures: [{ code: 'clusterCount', unit: 'clusters', decimals: 0, minimum: 0, maximum: 150, measuredIn: 'field' }],
  stops: [{ ...stop, place, reserve: { rowId: 'r', rowLabel: '4', ordinal: 8, vineNumber: 8, place: place ? spare : undefined } }],
}) as unknown as FieldRound;
const labels = async (round: FieldRound, language: 'en' | 'fr') => {
  const draft = emptyDraft(round);
  const lines = await mountWithTexts(PaperLines, { language, props: { round, modelValue: { ...draft, t: { ...draft.t!, states: ['missing' as const, '' as const] as never } } } });
  return lines.findAll('[aria-label]').map((part) => part.attributes('aria-label'));
};

describe('a vine on screen', () => {
  it('of a typed sheet is read out by row and vine, or by coordinates where there are no rows', async () => {
    expect(await labels(roundOf(), 'en')).toEqual(['Clusters per vine, row 4, vine 7', 'What stands at row 4, vine 7', 'What stands at the reserve of row 4, vine 7']);
    expect(await labels(roundOf(vine), 'en')).toEqual(['Clusters per vine, 43.250000, 3.100000', 'What stands at 43.250000, 3.100000', 'What stands at the reserve of 43.250000, 3.100000']);
    expect((await labels(roundOf(vine), 'fr')).join()).not.toMatch(/rang|cep /i);
  });

  it('that was read twice heads its card by the same name', async () => {
    const reading = { id: 'a', who: 'Ana', typedBy: null, isMine: false, source: 'field', takenAt: '2026-07-09T09:00:00Z', receivedAt: '2026-07-09T09:00:00Z', wrongClock: null, measureCode: 'clusterCount', value: 20, unit: 'clusters', rowLabel: '4', vine: 7, seenAs: null, isReserve: false, note: '', isLeftOut: false, isCorrected: false };
    const card = (over: object, place?: [number, number]) => ({ id: 'c', kind: 'sameVine', state: 'open', blockName: 'Goblets', roundDate: null, readings: [{ ...reading, place }, { ...reading, id: 'b', value: 21, place }], readingIds: ['a', 'b'], choice: null, keptReadingId: null, settledBy: null, settledAt: null, createdAt: '2026-07-09T09:00:00Z', maySettle: true, mayReopen: false, ...over }) as Card;
    const head = async (shown: Card) => textOf((await mountWithTexts(ConflictCard, { language: 'en', props: { card: shown } })).find('h2').element);
    expect(await head(card({}))).toBe('Row 4, vine 7 was read more than once');
    expect(await head(card({}, vine))).toBe('43.250000, 3.100000 was read more than once');
    expect(await head(card({ kind: 'sameTarget' }))).toBe('A vine and its reserve were both read, row 4, vine 7');
  });

  it('that the crew found otherwise is named by where it stands', () => {
    const block = { boundary: { coordinates: [[[[3.1, 43.25], [3.102, 43.25], [3.102, 43.252], [3.1, 43.252], [3.1, 43.25]]]] }, epsg: 32631, rowBearingDeg: 0, startPostColour: null, endPostColour: null };
    const piece = { from: [3.101, 43.2502], to: [3.101, 43.2518], bends: [], lengthM: 177.7, firstVine: 1, vineCount: 40, firstVineM: 0.5, stepM: 2 };
    const rows = { items: [{ id: 'r', label: '4', pieces: [piece], vineCount: 40, vines: [{ ordinal: 1, state: 'missing', proposed: true }] }], numbering: { rowOneSide: 'low', vineOneEnd: 'start' } } as never;
    expect(proposedVines(block, rows)[0]).toMatchObject({ row: '4', vine: 1, place: undefined });
    const [lon, lat] = proposedVines({ ...block, withoutRows: true }, rows)[0]!.place!;
    expect(lon).toBeCloseTo(3.101, 5);
    expect(lat).toBeCloseTo(43.2502 + 0.5 / 111_100, 5);
  });

  it('keeps where it stands with what was typed or photographed there, for the phone’s own lists', () => {
    const walk = { estateId: 'e', personId: 'p', round: roundOf(vine) };
    const at = (place?: [number, number]) => ({ stop: stop as never, vine: { ...stop, place, isReserve: false } });
    expect(findingEntry(walk, at(vine), { state: 'missing', readBy: null }).place).toEqual(vine);
    expect(photoEntry(walk, at(vine), { picture: new Blob(), note: '' })).toMatchObject({ place: vine, row: '4', vine: 7, received: 0 });
    expect(findingEntry(walk, at(), { state: 'missing', readBy: null })).not.toHaveProperty('place');
  });
});
