import { mount, type ComponentMountingOptions, type VueWrapper } from '@vue/test-utils';
import { createPinia, setActivePinia } from 'pinia';
import PrimeVue from 'primevue/config';
import type { Component } from 'vue';
import { createMemoryHistory, createRouter } from 'vue-router';
import { i18n, loadOfficeTexts, showLanguage } from '../../src/lib/i18n.ts';
import { routePlaces } from '../../src/router/routeNames.ts';
import type { Language } from '../../src/lib/format.ts';

/** A component with real texts, a store, PrimeVue and a router that knows every place, as people see it. */
export async function mountWithTexts<C extends Component>(component: C, options: ComponentMountingOptions<C> & { language?: Language } = {}): Promise<VueWrapper> {
  const { language = 'en', ...rest } = options;
  await showLanguage(language);
  await loadOfficeTexts();
  const pinia = createPinia();
  setActivePinia(pinia);
  const router = createRouter({ history: createMemoryHistory(), routes: Object.entries(routePlaces).map(([name, { path, frame }]) => ({ name, path, component: { render: () => null }, meta: { frame } })) });
  await router.push('/');
  return mount(component, { attachTo: document.body, ...rest, global: { plugins: [pinia, i18n, [PrimeVue, { unstyled: true }], router], ...rest.global } } as never) as unknown as VueWrapper;
}

/** Text of an element as it is read: no runs of space. */
export function textOf(element: { textContent: string | null } | null | undefined): string {
  return (element?.textContent ?? '').replace(/\s+/g, ' ').trim();
}
