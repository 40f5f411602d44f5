import { describe, expect, it } from 'vitest';
import type { BlockRowView } from '../../shared/contracts/rows.ts';
import type { ZoneOperation } from '../../shared/contracts/zonings.ts';
import { editPlace, editSentence } from '../../src/components/zones/editWords.ts';
import type { Format } from '../../src/lib/format.ts';

/** Names of sentences with what is put into them, so that a wording may change. */
const t = (key: string, named: Record<string, unknown> = {}) => `${key.split('.').at(-1)}(${Object.values(named).join(' ')})`;
const tools = { t, format: { list: (parts: readonly string[]) => parts.join(' + ') } as Format };
const row = (label: string, firstVine = 1) => ({ id: `row-${label}`, label, vineCount: 50, pieces: [{ firstVine }] }) as unknown as BlockRowView;
const rows = [row('21'), row('22'), row('23', -4), row('24'), row('25')];
const given = (...parts: [string, (number | null)?, (number | null)?][]): ZoneOperation => ({ kind: 'giveRows', toZone: 2, rows: parts.map(([label, from = null, to = null]) => ({ rowId: `row-${label}`, from, to })) });

describe('what the list of edits says', () => {
  it('names rows by their labels, those beside each other together', () => {
    expect(editPlace(given(['24'], ['21'], ['22']), { rows, vineOneEnd: 'start' }, tools)).toBe('rowsTo(21 22) + oneRow(24)');
    expect(editSentence(given(['24']), tools)).toBe('giveRows(1 2)');
  });

  it('counts the vines of a part from the end where people count', () => {
    expect(editPlace(given(['23', 0, 9]), { rows, vineOneEnd: 'start' }, tools)).toBe('oneRow(23), vinesFromTo(5 14)');
    expect(editPlace(given(['22', 40]), { rows, vineOneEnd: 'start' }, tools)).toBe('oneRow(22), vinesFromTo(40 50)');
    expect(editSentence(given(['22', 40]), tools)).toBe('giveParts(1 2)');
  });

  it('counts from the other end where people begin there, as the post and the table of rows do', () => {
    expect(editPlace(given(['22', 40]), { rows, vineOneEnd: 'end' }, tools)).toBe('oneRow(22), vinesFromTo(1 11)');
    expect(editPlace(given(['23', -4, 4]), { rows, vineOneEnd: 'end' }, tools)).toBe('oneRow(23), vinesFromTo(42 50)');
  });

  it('says along which row was split, and nothing of rows that are gone', () => {
    expect(editPlace({ kind: 'splitAlongRow', zone: 1, rowId: 'row-25' }, { rows, vineOneEnd: 'start' }, tools)).toBe('oneRow(25)');
    expect(editPlace({ kind: 'splitAlongRow', zone: 1, rowId: 'row-99' }, { rows, vineOneEnd: 'start' }, tools)).toBe('');
  });

  it('names the numbers that changed', () => {
    expect(editPlace({ kind: 'renumber', numbers: [{ from: 3, to: 9 }] }, { rows, vineOneEnd: 'start' }, tools)).toBe('renumberedPair(3 9)');
  });
});
