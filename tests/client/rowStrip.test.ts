import { afterEach, describe, expect, it } from 'vitest';
import type { VueWrapper } from '@vue/test-utils';
import RowStrip from '../../src/components/rowstrip/RowStrip.vue';
import type { StripChoice, StripRow } from '../../src/components/rowstrip/rowStripTypes.ts';
import { afterTap, choiceBetween, idsBetween, movedVine, wholeRows } from '../../src/components/rowstrip/stripChoose.ts';
import { chosenRuns, nearestPostM, postNumber, stripScale, sumOfChoice, vineAtM, vineM, xOfM } from '../../src/components/rowstrip/stripLayout.ts';
import { zoneToSplit } from '../../src/components/zones/zoneStrip.ts';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

/** Three rows, a vine each metre: row 1 of 10 vines from 0 m, row 2 of 12 from −2 m, row 3 of 8 from 2 m. */
const row = (label: string, startOffsetM: number, vineCount: number, missing: number[] = []): StripRow => ({
  id: `r${label}`, label, startOffsetM, lengthM: vineCount, vineCount, startPost: 'red', endPost: 'white', missing,
  zoneRuns: [{ zone: 1, from: 1, to: 4 }, { zone: 2, from: 5, to: vineCount }],
});
const rows = [row('1', 0, 10, [3]), row('2', -2, 12), row('3', 2, 8)];

describe('places along a row', () => {
  it('a vine stands in the middle of its metre, and its place finds it again', () => {
    expect(vineM(rows[1]!, 1)).toBe(-1.5);
    for (const one of rows) for (let vine = 1; vine <= one.vineCount; vine++) expect(vineAtM(one, vineM(one, vine))).toBe(vine);
  });

  it('places before the first and past the last post belong to the end vines', () => {
    expect(vineAtM(rows[0]!, -5)).toBe(1);
    expect(vineAtM(rows[0]!, 99)).toBe(10);
  });

  it('all rows share one scale, so that the outline appears', () => {
    const scale = stripScale(rows, { width: 150, left: 0, right: 0 });
    // 12 m from −2 to 10 on 150 px less two posts of 5 px.
    expect(scale.pxPerM).toBeCloseTo(140 / 12, 9);
    expect(xOfM(rows[2]!.startOffsetM, scale) - xOfM(rows[0]!.startOffsetM, scale)).toBeCloseTo(2 * (140 / 12), 9);
  });

  it('posts are counted from the start, panels of four vines', () => {
    expect(nearestPostM(rows[0]!, 5.5, 4)).toBe(4);
    expect(nearestPostM(rows[0]!, 9.4, 4)).toBe(8);
    expect(nearestPostM(rows[0]!, 40, 4)).toBe(10);
    expect(postNumber(rows[0]!, 4, 4)).toBe(2);
  });
});

describe('choosing', () => {
  const tap = (choice: StripChoice | null, rowIndex: number, alongM: number, extend = false) => afterTap(rows, choice, { tap: { rowIndex, alongM, extend }, vinesPerPanel: 4 });

  it('first tap takes the row, the second from where, the third to where, the fourth the row again', () => {
    const whole = tap(null, 0, 5);
    expect(whole).toEqual(wholeRows(['r1']));
    const from = tap(whole, 0, 7.6);
    expect(from).toEqual({ rowIds: ['r1'], fromM: 8, toM: null });
    const part = tap(from, 0, 4.2);
    expect(part).toEqual({ rowIds: ['r1'], fromM: 4, toM: 8 });
    expect(tap(part, 0, 1)).toEqual(wholeRows(['r1']));
  });

  it('a tap on another row starts there; Shift takes the rows between', () => {
    const first = tap(null, 0, 1);
    expect(tap(first, 2, 3)).toEqual(wholeRows(['r3']));
    expect(tap(first, 2, 3, true).rowIds).toEqual(['r1', 'r2', 'r3']);
    expect(idsBetween(rows, 2, 0)).toEqual(['r3', 'r2', 'r1']);
  });

  it('a part over several rows is the same stretch of ground, not the same vine numbers', () => {
    expect(chosenRuns(rows, { rowIds: ['r1', 'r2', 'r3'], fromM: 2, toM: 6 })).toEqual([
      { rowId: 'r1', from: 3, to: 6 },
      { rowId: 'r2', from: 5, to: 8 },
      { rowId: 'r3', from: 1, to: 4 },
    ]);
  });

  it('rows that do not reach the part are left out, and missing vines are told apart', () => {
    expect(sumOfChoice(rows, { rowIds: ['r1', 'r3'], fromM: -1, toM: 2 })).toEqual({ rows: 1, vines: 2, missing: 0 });
    expect(sumOfChoice(rows, wholeRows(['r1', 'r2']))).toEqual({ rows: 2, vines: 21, missing: 1 });
  });

  it('up and down keep the place on the ground; ends stop', () => {
    expect(movedVine(rows, { rowId: 'r1', vine: 6 }, { move: 'down', step: 1 })).toEqual({ rowId: 'r2', vine: 8 });
    expect(movedVine(rows, { rowId: 'r1', vine: 1 }, { move: 'up', step: 1 })).toEqual({ rowId: 'r1', vine: 1 });
    expect(movedVine(rows, { rowId: 'r1', vine: 9 }, { move: 'right', step: 4 })).toEqual({ rowId: 'r1', vine: 10 });
  });

  it('Shift from vine to vine spans rows and the stretch between', () => {
    expect(choiceBetween(rows, { rowId: 'r1', vine: 3 }, { here: { rowId: 'r2', vine: 8 }, move: 'right' })).toEqual({ rowIds: ['r1', 'r2'], fromM: 2, toM: 6 });
  });
});

describe('row strip', () => {
  let wrapper: VueWrapper;
  afterEach(() => wrapper.unmount());
  const strip = (props: Record<string, unknown> = {}) =>
    mountWithTexts(RowStrip, { props: { label: 'Rows of Lime Kiln', rows, zones: [{ zone: 1, name: 'Bank' }, { zone: 2, name: 'Middle' }], colours: { set: 'ordered', count: 2 }, choosable: true, canGive: true, vinesPerPanel: 4, 'onUpdate:choice': (choice: unknown) => wrapper.setProps({ choice } as never), ...props } as never });
  const press = (key: string, more: Record<string, unknown> = {}) => wrapper.find('[role=grid]').trigger('keydown', { key, ...more });
  const spoken = () => textOf(wrapper.find('[role=gridcell]').element);

  it('is a grid with one stop for Tab that speaks each vine it comes to', async () => {
    wrapper = await strip();
    const grid = wrapper.find('[role=grid]');
    expect(grid.attributes()).toMatchObject({ tabindex: '0', 'aria-rowcount': '3', 'aria-colcount': '12' });
    expect(spoken()).toBe('Row 1, vine 1, zone 1');
    await press('ArrowRight');
    await press('ArrowRight');
    expect(spoken()).toBe('Row 1, vine 3, zone 1, missing vine');
    await press('ArrowRight');
    expect(spoken()).toBe('Row 1, vine 4, zone 1, edge to zone 2');
    expect(grid.attributes('aria-activedescendant')).toBe(wrapper.find('[role=gridcell]').attributes('id'));
    await press('End');
    expect(spoken()).toBe('Row 1, vine 10, zone 2');
    await press('ArrowLeft', { ctrlKey: true });
    expect(spoken()).toBe('Row 1, vine 6, zone 2');
  });

  it('Space takes the row, Shift and down a second one, a digit gives them', async () => {
    wrapper = await strip();
    await press(' ');
    expect(wrapper.text()).toContain('Row 1');
    expect(wrapper.text()).toContain('9 vines, 1 missing');
    await press('ArrowDown', { shiftKey: true });
    expect(wrapper.emitted('update:choice')!.at(-1)).toEqual([wholeRows(['r1', 'r2'])]);
    expect(wrapper.text()).toContain('Rows 1 to 2');
    await press('2');
    expect(wrapper.emitted('give')).toEqual([[2]]);
    // A slip of the finger begins no zone.
    await press('6');
    expect(wrapper.emitted('give')).toHaveLength(1);
  });

  it('Shift at the last vine, or back to where it began, takes that vine and not the row; only the choice is told', async () => {
    wrapper = await strip();
    const told = () => textOf(wrapper.find('[role=status]').element);
    expect(told()).toBe('');
    await press('End');
    await press('ArrowRight', { shiftKey: true });
    expect(told()).toBe('Row 1, posts 3–4 1 vine, 0 missing');
    expect(chosenRuns(rows, wrapper.emitted('update:choice')!.at(-1)![0] as StripChoice)).toEqual([{ rowId: 'r1', from: 10, to: 10 }]);
    await press('ArrowLeft', { shiftKey: true });
    await press('ArrowRight', { shiftKey: true });
    expect(chosenRuns(rows, wrapper.emitted('update:choice')!.at(-1)![0] as StripChoice)).toEqual([{ rowId: 'r1', from: 10, to: 10 }]);
    // Down and up again are whole rows, as before.
    await press('ArrowDown', { shiftKey: true });
    await press('ArrowUp', { shiftKey: true });
    expect(wrapper.emitted('update:choice')!.at(-1)).toEqual([wholeRows(['r1'])]);
  });

  it('Space again says from where, and once more to where, as a tap does', async () => {
    wrapper = await strip();
    await press(' ');
    for (let step = 0; step < 4; step++) await press('ArrowRight');
    await press(' ');
    for (let step = 0; step < 3; step++) await press('ArrowRight');
    await press(' ');
    expect(wrapper.emitted('update:choice')!.map(([choice]) => choice)).toEqual([wholeRows(['r1']), { rowIds: ['r1'], fromM: 4, toM: null }, { rowIds: ['r1'], fromM: 4, toM: 8 }]);
  });

  it('leaves keys of the browser with Ctrl alone', async () => {
    wrapper = await strip();
    await press('1', { ctrlKey: true });
    await press('u', { ctrlKey: true });
    expect([wrapper.emitted('give'), wrapper.emitted('undo')]).toEqual([undefined, undefined]);
  });

  it('a split along a row cuts the zone asked for where the row crosses it, else the one with most of the row', () => {
    expect([2, 1, 4, null].map((asked) => zoneToSplit(rows, wholeRows(['r2']), asked))).toEqual([2, 1, 2, 2]);
    expect(zoneToSplit(rows, wholeRows(['r1', 'r2']), 1)).toBeNull();
    expect(zoneToSplit(rows, null, 1)).toBeNull();
  });

  it('u asks to undo and Shift-u to redo; Escape lets go', async () => {
    wrapper = await strip({ choice: wholeRows(['r1']) });
    await press('u');
    await press('U');
    await press('Escape');
    expect(wrapper.emitted('undo')).toHaveLength(1);
    expect(wrapper.emitted('redo')).toHaveLength(1);
    expect(wrapper.emitted('update:choice')!.at(-1)).toEqual([null]);
  });

  it('says a part in posts and offers the zones as buttons', async () => {
    wrapper = await strip({ choice: { rowIds: ['r1'], fromM: 4, toM: 8 } });
    expect(wrapper.text()).toContain('Row 1, posts 2–3');
    await wrapper.find('button[aria-label="Give to zone 2, Middle"]').trigger('click');
    expect(wrapper.emitted('give')).toEqual([[2]]);
  });

  it('paints a block of more than 3 000 vines on a canvas and a smaller one as shapes', async () => {
    wrapper = await strip();
    expect(wrapper.find('.strip-svg').exists()).toBe(true);
    wrapper.unmount();
    wrapper = await strip({ rows: Array.from({ length: 31 }, (_, index) => ({ ...row(String(index + 1), 0, 100) })) });
    expect(wrapper.find('canvas').exists()).toBe(true);
    expect(wrapper.find('.strip-svg').exists()).toBe(false);
  });
});
