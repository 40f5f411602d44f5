import { describe, expect, it } from 'vitest';
import LabGrid from '../../src/components/lab/LabGrid.vue';
import LabTyping from '../../src/components/lab/LabTyping.vue';
import { figuresOf, idsNeeded, noSetup, pastedBlock } from '../../src/components/lab/labDraft.ts';
import type { BagLine } from '../../shared/contracts/bags.ts';
import type { LabMeasureView, LabResult } from '../../shared/contracts/lab.ts';
import { labelCode } from '../../shared/field/labelCode.ts';
import { mountWithTexts } from './mountWithTexts.ts';

const place = { code: labelCode(7), measure: 'brix' };
const stored = (typed: string, state: LabResult['state'] = 'provisional'): LabResult => ({
  id: `id of ${typed}`, bagId: 'bag', measureCode: 'brix', value: Number(typed), below: false, typed, unitTyped: '°Brix', instrument: '', method: '', analysedOn: null, state, stateBy: null, stateAt: null, person: null,
  receivedAt: '2026-09-03T10:00:00Z', fileName: null, corrected: false, flags: [], excludedReason: null, exclusionProposal: null,
});
const made = (text: string, results: LabResult[] = [], setup = noSetup) => figuresOf({ place, draft: { text, ids: ['a', 'b', 'c'] }, stored: results, setup, reason: '' });

describe('a cell of the grid', () => {
  it('adds each reading of a bag as a figure of its own', () => expect(made('23,4 / <0,1')).toMatchObject({ figures: [{ id: 'a', typed: '23,4', supersedes: null }, { id: 'b', typed: '<0,1' }], needsReason: false }));
  it('leaves what is stored alone and corrects what changed', () => expect(made('23.4 / 22', [stored('23.4'), stored('21')])).toMatchObject({ figures: [{ id: 'b', typed: '22', supersedes: 'id of 21' }] }));
  it('needs a reason to change a checked figure', () => expect(made('22', [stored('21', 'checked')])).toMatchObject({ needsReason: true }));
  it('does not pass over a figure that somebody else stored since it was typed', () => {
    const cell = (seen: string[]) => figuresOf({ place, draft: { text: '23.6', ids: ['a'], seen }, stored: [stored('23.4')], setup: noSetup, reason: '' });
    expect(cell([])).toEqual({ trouble: 'meanwhile', at: '23.4' });
    expect(cell(['id of 23.4'])).toMatchObject({ figures: [{ typed: '23.6', supersedes: 'id of 23.4', seen: ['id of 23.4'] }] });
  });
  it('does not let a stored figure be deleted', () => expect(made('', [stored('21')])).toMatchObject({ trouble: 'fewer', at: '21' }));
  it('says what cannot be read, or cannot be in the unit', () => {
    expect(made('sweet')).toMatchObject({ trouble: 'unreadable' });
    expect(made('23', [], { unit: 'gravity', instrument: '', method: '' })).toMatchObject({ trouble: 'unit' });
  });
  it('keeps an id for every reading it holds', () => expect([idsNeeded('23,4 / 22'), idsNeeded(''), idsNeeded('sweet')]).toEqual([2, 1, 1]));
  it('takes a block of a spreadsheet', () => expect(pastedBlock('23,4\t3,41\r\n22\t\r\n')).toEqual([['23,4', '3,41'], ['22', '']]));
});

describe('the grid by keyboard', () => {
  const bag = (at: number) => ({ id: `bag ${at}`, code: labelCode(at), place: 'here', blockName: 'Long Acre', zone: 1 }) as BagLine;
  const measure = (code: string, unit: string): LabMeasureView => ({ code, name: '', unit, decimals: 1, minimum: 2, maximum: 35, confidence: 0.95, inUse: true });
  const mount = () => mountWithTexts(LabGrid, { attachTo: document.body, props: { bags: [bag(1), bag(2)], measures: [measure('brix', '°Brix'), measure('ph', 'pH')], results: new Map(), draft: {}, setup: {}, troubles: new Map(), readOnly: false } });

  it('moves with Enter and arrows, and stays inside a text until its end', async () => {
    const grid = await mount();
    const field = (at: string) => grid.find(`input[data-at="${at}"]`);
    (field('0-0').element as HTMLInputElement).focus();
    await field('0-0').trigger('keydown', { key: 'Enter' });
    expect(document.activeElement).toBe(field('1-0').element);
    await field('1-0').trigger('keydown', { key: 'ArrowRight' });
    expect(document.activeElement).toBe(field('1-1').element);
    await field('1-1').trigger('keydown', { key: 'ArrowUp' });
    expect(document.activeElement).toBe(field('0-1').element);
    await field('0-1').setValue('3.41');
    (field('0-1').element as HTMLInputElement).setSelectionRange(2, 2);
    await field('0-1').trigger('keydown', { key: 'ArrowLeft' });
    expect(document.activeElement).toBe(field('0-1').element);
    grid.unmount();
  });

  it('spreads a pasted block over the cells from the one it is pasted in', async () => {
    const grid = await mount();
    await grid.find('input[data-at="0-0"]').trigger('paste', { clipboardData: { getData: () => '23,4\t3,41\n22,1\t3,38\n21\t3,3' } });
    expect(grid.emitted('type')![0]).toEqual([{ [`${labelCode(1)} brix`]: '23,4', [`${labelCode(1)} ph`]: '3,41', [`${labelCode(2)} brix`]: '22,1', [`${labelCode(2)} ph`]: '3,38' }]);
    grid.unmount();
  });

  it('that may not store yet leads to what is lacking instead of keeping silent', async () => {
    const bench = { measures: [measure('brix', '°Brix')], bags: [{ ...bag(1), id: 'bag' }], results: [stored('21', 'checked')], groups: [] };
    const typing = await mountWithTexts(LabTyping, { props: { bench, readOnly: false, busy: false, outcomes: [], draft: { [`${labelCode(1)} brix`]: { text: '22', ids: ['a'] } }, setup: {} } as never });
    const press = () => typing.find('input[data-at="0-0"]').trigger('keydown', { key: 'Enter', ctrlKey: true });
    await press();
    expect(typing.emitted('store')).toBeUndefined();
    const reason = typing.find('.foot input');
    expect(document.activeElement).toBe(reason.element);
    await reason.setValue('Misread the scale');
    await press();
    expect(typing.emitted('store')).toHaveLength(1);
    typing.unmount();
  });
});
