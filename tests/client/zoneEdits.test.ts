import { afterEach, describe, expect, it } from 'vitest';
import type { VueWrapper } from '@vue/test-utils';
import type { ZoneEditLine } from '../../shared/contracts/zonings.ts';
import EditList from '../../src/components/zones/EditList.vue';
import EditorsNote from '../../src/components/zones/EditorsNote.vue';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

let wrapper: VueWrapper;
afterEach(() => wrapper.unmount());

const edit = (sequence: number, operation: ZoneEditLine['operation'], undone = false): ZoneEditLine => ({ sequence, operation, undone, author: 'Ada', at: '2026-10-01T08:00:00Z', reason: '' }) as ZoneEditLine;

describe('edits of zones, told as they come', () => {
  it('says to screen readers what was done, undone and done again, and nothing of what was there before', async () => {
    const [split, merge] = [edit(1, { kind: 'snap', mode: 'wholeRow' } as never), edit(2, { kind: 'merge', zones: [2, 3], into: 2 } as never)];
    wrapper = await mountWithTexts(EditList, { props: { edits: [split], rows: { rows: [], vineOneEnd: 'start' }, start: { text: 'As the run made them', who: 'Ada' } } });
    const told = () => textOf(wrapper.find('[role=status]').element);
    expect(told()).toBe('');
    await wrapper.setProps({ edits: [split, merge] });
    expect(told()).toBe('2: Zone 3 joined to zone 2');
    await wrapper.setProps({ edits: [split, { ...merge, undone: true }] });
    expect(told()).toBe('2: Zone 3 joined to zone 2. Undone, can be redone until another edit is made');
    await wrapper.setProps({ edits: [split, merge] });
    expect(told()).toBe('2: Zone 3 joined to zone 2');
    // The same act again is told again.
    await wrapper.setProps({ edits: [split, merge, { ...merge, sequence: 3 }] });
    expect(told()).toBe('3: Zone 3 joined to zone 2');
  });

  it('does not tell a person of her own change while it is on its way', async () => {
    wrapper = await mountWithTexts(EditorsNote, { props: { presence: { revision: 8, changedBy: 'Tessa Brand', others: [] } as never, revision: 7, busy: true } });
    expect(wrapper.find('[role=status]').exists()).toBe(false);
    await wrapper.setProps({ busy: false });
    expect(wrapper.text()).toContain('Tessa Brand');
  });
});
