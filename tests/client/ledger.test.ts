import { readFileSync } from 'node:fs';
import { resolve } from 'node:path';
import { afterEach, describe, expect, it } from 'vitest';
import { nextTick } from 'vue';
import LedgerTable from '../../src/components/base/LedgerTable.vue';
import { hideWidths } from '../../src/components/base/ledgerTypes.ts';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

interface Zone { id: string; name: string; vines: number | null }
const zones: Zone[] = [
  { id: 'z1', name: 'Kiln bank', vines: 1284 },
  { id: 'z2', name: 'Middle', vines: 402 },
  { id: 'z3', name: 'Ditch', vines: null },
];
const columns = [
  { id: 'name', label: 'Zone', text: (zone: Zone) => zone.name, sortBy: (zone: Zone) => zone.name },
  { id: 'vines', label: 'Vines', kind: 'figure' as const, text: (zone: Zone) => String(zone.vines), sortBy: (zone: Zone) => zone.vines },
];

async function ledger(props: Record<string, unknown> = {}) {
  return mountWithTexts(LedgerTable, { props: { caption: 'Zones of Lime Kiln', lines: zones, lineKey: (zone: Zone) => zone.id, columns, opens: true, ...props } as never, slots: { 'sum-name': '3 zones' } });
}

let wrapper: Awaited<ReturnType<typeof ledger>>;
afterEach(() => wrapper.unmount());

const names = () => wrapper.findAll('tbody th').map((cell) => textOf(cell.element));
const press = async (key: string) => {
  await wrapper.find('.ledger-name:focus').trigger('keydown', { key });
  await nextTick();
};
const focusFirst = () => (wrapper.find('tbody button').element as HTMLElement).focus();

describe('ledger', () => {
  it('is a table with its caption, its heads and a name in each line', async () => {
    wrapper = await ledger({ sum: true });
    expect(textOf(wrapper.find('caption').element)).toBe('Zones of Lime Kiln');
    expect(wrapper.findAll('[role=columnheader]').map((head) => textOf(head.element))).toEqual(['Zone', 'Vines']);
    expect(names()).toEqual(['Kiln bank', 'Middle', 'Ditch']);
    expect(textOf(wrapper.find('tfoot').element)).toContain('3 zones');
  });

  it('has a rule of the style sheet for every width below which a column may be left out', () => {
    const css = readFileSync(resolve(import.meta.dirname, '../../src/components/base/ledger.css'), 'utf8');
    const rules = [...css.matchAll(/@container ledger \(max-width: (\d+)px\) \{ \.ledger \.hide-(\d+) \{ display: none; \} \}/g)].map(([, below, width]) => [Number(below) + 1, Number(width)]);
    expect(rules).toEqual(hideWidths.map((width) => [width, width]));
  });

  it('is one stop for Tab; up, down, Home and End move within', async () => {
    wrapper = await ledger();
    expect(wrapper.findAll('tbody button[tabindex="0"]')).toHaveLength(1);
    focusFirst();
    await press('ArrowDown');
    expect(textOf(document.activeElement)).toBe('Middle');
    await press('End');
    expect(textOf(document.activeElement)).toBe('Ditch');
    await press('ArrowDown');
    expect(textOf(document.activeElement)).toBe('Ditch');
    await press('Home');
    expect(textOf(document.activeElement)).toBe('Kiln bank');
  });

  it('Space chooses a line, Enter opens it, slash and question mark are left to the screen', async () => {
    wrapper = await ledger();
    focusFirst();
    await press('ArrowDown');
    await press(' ');
    expect(wrapper.emitted('update:chosen')).toEqual([['z2']]);
    await press('Enter');
    expect(wrapper.emitted('open')).toEqual([[zones[1]]]);
    const asked = ['/', '?', 'ArrowUp'].map((key) => new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true }));
    for (const event of asked) document.activeElement!.dispatchEvent(event);
    expect(asked.map(({ defaultPrevented }) => defaultPrevented)).toEqual([false, false, true]);
  });

  it('a press on a line chooses it, and the chosen line says so', async () => {
    wrapper = await ledger({ chosen: 'z1' });
    expect(wrapper.find('tr[aria-current]').attributes('data-key')).toBe('z1');
    await wrapper.find('tr[data-key=z3] td').trigger('click');
    expect(wrapper.emitted('update:chosen')).toEqual([['z3']]);
  });

  it('a press on the name opens the line; where the chosen line unfolds it chooses', async () => {
    wrapper = await ledger();
    await wrapper.find('tr[data-key=z2] .ledger-name').trigger('click');
    expect([wrapper.emitted('open'), wrapper.emitted('update:chosen')]).toEqual([[[zones[1]]], undefined]);
    wrapper.unmount();
    wrapper = await mountWithTexts(LedgerTable, { props: { caption: 'Zones', lines: zones, lineKey: (zone: Zone) => zone.id, columns, opens: true } as never, slots: { under: 'more of it' } });
    await wrapper.find('tr[data-key=z2] .ledger-name').trigger('click');
    expect([wrapper.emitted('open'), wrapper.emitted('update:chosen')]).toEqual([undefined, [['z2']]]);
  });

  it('a head sorts up, down and back; lines without a value stay last both ways', async () => {
    wrapper = await ledger({ 'onUpdate:sort': (sort: unknown) => wrapper.setProps({ sort } as never) });
    const head = () => wrapper.findAll('thead button')[1]!;
    await head().trigger('click');
    expect(names()).toEqual(['Middle', 'Kiln bank', 'Ditch']);
    expect(wrapper.findAll('[role=columnheader]')[1]!.attributes('aria-sort')).toBe('ascending');
    await head().trigger('click');
    expect(names()).toEqual(['Kiln bank', 'Middle', 'Ditch']);
    expect(wrapper.findAll('[role=columnheader]')[1]!.attributes('aria-sort')).toBe('descending');
    await head().trigger('click');
    expect(names()).toEqual(['Kiln bank', 'Middle', 'Ditch']);
    expect(wrapper.findAll('[role=columnheader]')[1]!.attributes('aria-sort')).toBeUndefined();
  });
});
