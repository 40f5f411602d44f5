import { describe, expect, it } from 'vitest';
import { boxValue, emptyDraft, paperBatch, retyped, typedVines, unreadBoxes, vineOfLine, withOutcomes, type PaperDraft } from '../../src/components/field/paperDraft.ts';
import type { FieldRound } from '../../shared/contracts/rounds.ts';

const round = {
  id: 'round', blockId: 'block', received: [],
  measures: [{ code: 'clusterCount', unit: 'clusters', decimals: 0, minimum: 0, maximum: 150, measuredIn: 'field' }],
  stops: [1, 2].map((number) => ({ targetId: `t${number}`, number, rowId: 'row', rowLabel: '4', ordinal: number, vineNumber: number, measures: ['clusterCount'], reserve: { rowId: 'row', rowLabel: '4', ordinal: number + 50, vineNumber: number + 50 } })),
} as unknown as FieldRound;
const sheet = { personId: 'ana', takenAt: '2026-09-01T08:00:00Z' };
const typed = (draft: PaperDraft, target: string, text: string): PaperDraft => ({ ...draft, [target]: { ...draft[target]!, cells: { clusterCount: retyped(draft[target]!.cells.clusterCount!, text) } } });

describe('a sheet that is typed', () => {
  it('sends what stands in the boxes, in the name of who walked; an empty box is not nought', () => {
    const { readings } = paperBatch(round, typed(typed(emptyDraft(round), 't1', '0'), 't2', ''), sheet);
    expect(readings).toMatchObject([{ targetId: 't1', value: 0, source: 'paper', readBy: 'ana', seenAs: { row: '4', vine: 1 }, flags: [] }]);
  });

  it('takes a decimal comma, marks the unusual and leaves out what is no number', () => {
    const weighed = { ...round, measures: [{ ...round.measures[0]!, decimals: 2 }] } as FieldRound;
    expect(paperBatch(weighed, typed(emptyDraft(weighed), 't1', '12,5'), sheet).readings[0]!.value).toBe(12.5);
    expect(paperBatch(round, typed(emptyDraft(round), 't1', '400'), sheet).readings[0]!.flags).toEqual(['odd']);
    expect(paperBatch(round, typed(emptyDraft(round), 't1', 'many'), sheet).readings).toEqual([]);
  });

  it('neither saves nor forgets a count below zero or between two numbers, and counts the boxes that stay', () => {
    expect([boxValue('-3', round.measures[0]!), boxValue('12,5', round.measures[0]!), boxValue('x', round.measures[0]!), boxValue('-3', { decimals: 1, minimum: -20 })]).toEqual([{ problem: 'negative' }, { problem: 'notWhole' }, { problem: 'noNumber' }, { value: -3 }]);
    const draft = typed(typed(emptyDraft(round), 't1', '-3'), 't2', '12,5');
    expect(paperBatch(round, draft, sheet).readings).toEqual([]);
    expect(unreadBoxes(round, draft)).toBe(2);
    expect(typedVines(round, draft)).toBe(0);
    expect(unreadBoxes(round, typed(draft, 't2', '12'))).toBe(1);
    expect(typedVines(round, typed(draft, 't2', '12'))).toBe(1);
  });

  it('keeps the id of a box until it is saved, and corrects after that', () => {
    const draft = typed(typed(emptyDraft(round), 't1', '2'), 't1', '21');
    const cell = draft.t1!.cells.clusterCount!;
    expect(cell.id).toBe(paperBatch(round, draft, sheet).readings[0]!.id);
    const saved = { ...cell, outcome: { id: cell.id, state: 'received' as const, reason: null } };
    expect(retyped(saved, '21')).toEqual(saved);
    expect(retyped(saved, '22')).toMatchObject({ text: '22', supersedes: cell.id, outcome: null });
    expect(retyped({ ...saved, outcome: { id: cell.id, state: 'refused', reason: 'x' } }, '22').id).toBe(cell.id);
  });

  it('takes what was typed while the answer was on its way for a correction of what was sent', () => {
    const draft = typed(typed(emptyDraft(round), 't1', '21'), 't2', '30');
    const { readings } = paperBatch(round, draft, sheet);
    const outcomes = readings.map(({ id }) => ({ id, state: 'received' as const, reason: null }));
    const after = withOutcomes(typed(draft, 't1', '12'), readings, outcomes);
    expect(after.t2!.cells.clusterCount).toMatchObject({ text: '30', outcome: { state: 'received' } });
    expect(paperBatch(round, after, sheet).readings).toMatchObject([{ targetId: 't1', value: 12, supersedes: readings[0]!.id }]);
  });

  it('reads the reserve where something else stands, and none where both are gone', () => {
    const draft = typed(emptyDraft(round), 't1', '9');
    const gone: PaperDraft = { ...draft, t1: { ...draft.t1!, states: ['missing', ''] } };
    expect(paperBatch(round, gone, sheet)).toMatchObject({ readings: [{ ordinal: 51, flags: ['reserve'] }], findings: [{ ordinal: 1, state: 'missing', readBy: 'ana' }] });
    const both: PaperDraft = { ...draft, t1: { ...draft.t1!, states: ['missing', 'dead'] } };
    expect(vineOfLine(round.stops[0]!, both.t1!)).toBeNull();
    expect(paperBatch(round, both, sheet)).toMatchObject({ readings: [], findings: [{ ordinal: 1 }, { ordinal: 51, state: 'dead' }] });
  });
});
