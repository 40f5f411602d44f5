import type { Component } from 'vue';
import { ref } from 'vue';
import { describe, expect, it } from 'vitest';
import TicketForm from '../../src/components/review/TicketForm.vue';
import RestrictionForm from '../../src/components/safety/RestrictionForm.vue';
import { readerPreferencesKey } from '../../src/composables/useFormat.ts';
import { mountWithTexts } from './mountWithTexts.ts';

/** Auckland is 12 hours ahead of UTC in August; whoever fills the form in may be anywhere. */
const atEstate = { global: { provide: { [readerPreferencesKey as symbol]: ref({ units: 'metric', timeZone: 'Pacific/Auckland' }) } } };
const mountThere = (component: Component, props: Record<string, unknown>) => mountWithTexts(component, { props, ...atEstate } as never);

describe('fields of date and time', () => {
  it('of a restriction are times at the estate', async () => {
    const form = await mountThere(RestrictionForm, { blocks: [{ id: 'b', name: 'Heron Bank' }], rows: [] });
    await form.find('select').setValue('b');
    const [from, until] = form.findAll('input[type="datetime-local"]');
    const texts = form.findAll('input[type="text"]');
    await texts.at(-2)!.setValue('Sulphur');
    await texts.at(-1)!.setValue('24 h');
    await from!.setValue('2026-08-03T06:00');
    await until!.setValue('2026-08-04T06:00');
    await form.find('form').trigger('submit');
    expect(form.emitted('set')![0]![0]).toMatchObject({ product: 'Sulphur', labelInterval: '24 h', startsAt: '2026-08-02T18:00:00.000Z', endsAt: '2026-08-03T18:00:00.000Z' });
    form.unmount();
  });

  it('of a ticket that is corrected show when it was weighed by the estate’s clock', async () => {
    const corrects = { id: 't', lotId: 'l', ticketNo: '4711', grossKg: 5000, tareKg: 3000, weighedAt: '2026-08-02T18:30:00.000Z' };
    const form = await mountThere(TicketForm, { lots: [{ id: 'l', name: 'Lot 1', parts: [] }], corrects, busy: false, problem: null });
    expect((form.find('input[type="datetime-local"]').element as HTMLInputElement).value).toBe('2026-08-03T06:30');
    form.unmount();
  });
});
