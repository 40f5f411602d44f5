import { createServer, type IncomingMessage, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { flushPromises, type VueWrapper } from '@vue/test-utils';
import { createPinia, setActivePinia } from 'pinia';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import type { Session } from '../../shared/contracts/session.ts';
import { firstPlace } from '../../src/composables/firstPlace.ts';
import { createAppRouter } from '../../src/router/index.ts';
import { useSessionStore } from '../../src/stores/session.ts';
import SignInView from '../../src/views/door/SignInView.vue';
import { mountWithTexts, textOf } from './mountWithTexts.ts';

const estate = (id: string, roles: string[], permissions: Record<string, string> = {}) =>
  ({ id, name: 'Marlhaven', roles, permissions, season: null, settings: {}, marker: null, isDemo: true }) as unknown as Session['estates'][number];
const signedIn = (roles: string[], permissions: Record<string, string> = {}): Session => ({
  person: { id: 'p', name: 'Ada Corvin', email: 'a@demo.example', language: 'en', units: 'metric', theme: 'system' }, estates: [estate('e1', roles, permissions)], csrfToken: 'after', demo: true,
});
const nobody: Session = { person: null, estates: [], csrfToken: 'before', demo: true };

let server: Server;
const asked: { method: string; url: string; token: unknown; body: string }[] = [];

beforeAll(async () => {
  server = createServer((request: IncomingMessage, response) => {
    let body = '';
    request.on('data', (part: Buffer) => (body += part.toString()));
    request.on('end', () => {
      asked.push({ method: request.method!, url: request.url!, token: request.headers['x-csrf-token'], body });
      const good = body.includes('patchrow-demo');
      response.writeHead(request.method === 'POST' && !good ? 401 : 200, { 'content-type': 'application/json' });
      response.end(JSON.stringify(request.method === 'POST' ? (good ? signedIn(['manager']) : { status: 401, code: 'notSignedIn', title: 'Not signed in', detail: 'x' }) : nobody));
    });
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  (window as unknown as { happyDOM: { setURL(url: string): void } }).happyDOM.setURL(`http://127.0.0.1:${(server.address() as AddressInfo).port}/`);
});
afterAll(() => new Promise((resolve) => server.close(resolve)));

describe('sign-in', () => {
  let wrapper: VueWrapper;
  beforeEach(async () => {
    asked.length = 0;
    wrapper = await mountWithTexts(SignInView);
    await useSessionStore().load();
    await flushPromises();
  });
  afterEach(() => wrapper.unmount());
  const settle = async (done: () => boolean) => {
    for (let turn = 0; turn < 100 && !done(); turn++) await new Promise((resolve) => setTimeout(resolve, 10));
    await flushPromises();
  };

  it('fills in a person of the demo estate and signs them in with the token of the visit', async () => {
    const manager = wrapper.findAll('.demo button').find((button) => textOf(button.element) === 'manager')!;
    await manager.trigger('click');
    await wrapper.find('form').trigger('submit');
    await settle(() => useSessionStore().person !== null);
    expect(asked.at(-1)).toMatchObject({ method: 'POST', url: '/api/session', token: 'before' });
    expect(JSON.parse(asked.at(-1)!.body)).toEqual({ email: 'manager@demo.example', password: 'patchrow-demo' });
    expect(useSessionStore().person?.name).toBe('Ada Corvin');
  });

  it('a wrong password says what to check and keeps the address', async () => {
    await wrapper.find('input[type=email]').setValue('manager@demo.example');
    await wrapper.find('input[type=password]').setValue('wrong');
    await wrapper.find('form').trigger('submit');
    await settle(() => wrapper.find('[role=alert]').exists());
    expect(textOf(wrapper.find('[role=alert]').element)).toContain('E-mail and password do not fit together');
    expect((wrapper.find('input[type=email]').element as HTMLInputElement).value).toBe('manager@demo.example');
  });

  it('language comes first and is chosen by its own name', async () => {
    const languages = wrapper.findAll('.languages button');
    expect(languages.map((button) => textOf(button.element))).toEqual(['English', 'Español', 'Français', 'Italiano', 'Português']);
    await languages[3]!.trigger('click');
    expect(wrapper.emitted('language')).toEqual([['it']]);
  });
});

describe('who may go where', () => {
  const session = (value: Session) => {
    setActivePinia(createPinia());
    const store = useSessionStore();
    (store as unknown as { session: Session }).session = value;
    return store;
  };

  it('a right that the server gave counts as far as it reaches', () => {
    const store = session(signedIn(['agronomist'], { 'zones.edit': 'propose' }));
    expect(store.can('zones.edit', 'propose')).toBe(true);
    expect(store.can('zones.edit')).toBe(false);
  });

  it('crew start in the field when the field is there, others never do', () => {
    const router = { hasRoute: (name: string) => ['fieldWork', 'estate'].includes(name) } as never;
    expect(firstPlace(session(signedIn(['crew'])), router)).toMatchObject({ name: 'fieldWork' });
    expect(firstPlace(session(signedIn(['manager'])), router)).toMatchObject({ name: 'estate', params: { estateId: 'e1' } });
    expect(firstPlace(session(nobody), router)).toEqual({ name: 'home' });
  });

  it('without sign-in every place leads to the door and remembers where one wanted to go', async () => {
    const router = createAppRouter(session(nobody));
    router.addRoute({ name: 'lots', path: '/e/:estateId/lots', component: { template: '<i />' }, meta: { frame: 'office', needs: ['lots.see', 'read'] } });
    await router.push('/e/e1/lots');
    expect(router.currentRoute.value).toMatchObject({ name: 'signIn', query: { to: '/e/e1/lots' } });
  });

  it('an estate of others is not found, and a place without the right leads to the start', async () => {
    const router = createAppRouter(session(signedIn(['crew'])));
    router.addRoute({ name: 'lots', path: '/e/:estateId/lots', component: { template: '<i />' }, meta: { frame: 'office', needs: ['lots.see', 'read'] } });
    await router.push('/e/other/lots');
    expect(router.currentRoute.value.name).toBe('notFound');
    await router.push('/e/e1/lots');
    expect(router.currentRoute.value.name).not.toBe('lots');
  });

  it('another estate, and another person on the same device, begin with a fresh page', async () => {
    const left: string[] = [];
    const store = session({ ...signedIn(['manager'], { 'lots.see': 'read' }), estates: [estate('e1', ['manager']), estate('e2', ['manager'])] });
    const router = createAppRouter(store, (address) => left.push(address));
    router.addRoute({ name: 'lots', path: '/e/:estateId/lots', component: { template: '<i />' }, meta: { frame: 'office', needs: ['lots.see', 'read'] } });
    await router.push('/e/e1/lots');
    await router.push('/e/e1/lots?scenario=1');
    expect([router.currentRoute.value.fullPath, left]).toEqual(['/e/e1/lots?scenario=1', []]);
    await router.push('/e/e2/lots#free');
    expect([router.currentRoute.value.fullPath, left]).toEqual(['/e/e1/lots?scenario=1', ['/e/e2/lots#free']]);
    store.session = { ...store.session, person: { ...store.session.person!, id: 'q' } };
    await router.push('/e/e1/lots?scenario=2');
    expect(left.at(-1)).toBe('/e/e1/lots?scenario=2');
  });
});
