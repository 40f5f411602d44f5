import { defineStore } from 'pinia';
import { computed, ref, shallowRef } from 'vue';
import type { z } from 'zod';
import { may, type Permission, type Reach } from '../../shared/catalog/permissions.ts';
import type { invitationAnswer } from '../../shared/contracts/people.ts';
import type { CrewOffer } from '../../shared/contracts/phones.ts';
import type { personChange, Session, SessionEstate } from '../../shared/contracts/session.ts';
import { dayIn } from '../../shared/season/dayIn.ts';
import { readStored, writeStored } from '../lib/deviceStore.ts';
import { http, setCsrfToken } from '../lib/http.ts';
import { HttpProblem } from '../lib/httpProblem.ts';

export type PersonChange = z.infer<typeof personChange>;
export type InvitationAnswer = z.infer<typeof invitationAnswer>;

const nobody: Session = { person: null, estates: [], csrfToken: '', demo: false };
const strength: Record<Reach, number> = { read: 1, own: 2, propose: 3, do: 4 };

/** Who is signed in, in which estate, and what they may do there. */
export const useSessionStore = defineStore('session', () => {
  const session = shallowRef<Session>(nobody);
  const estateId = ref<string | null>(readStored<string>('estate'));
  const isLoaded = ref(false);

  const person = computed(() => session.value.person);
  const estates = computed(() => session.value.estates);
  const estate = computed<SessionEstate | null>(() => estates.value.find(({ id }) => id === estateId.value) ?? estates.value[0] ?? null);
  /** People who only pick and sample get the field's screens. */
  const isCrewOnly = computed(() => estate.value !== null && estate.value.roles.every((role) => role === 'crew'));

  function take(next: Session): void {
    session.value = next;
    writeStored('session', next.person === null ? null : { ...next, csrfToken: '' });
    isLoaded.value = true;
    setCsrfToken(next.csrfToken);
  }

  /** The calendar day at the estate, yyyy-mm-dd: what counts by days counts by it, wherever one reads. */
  const today = (now = new Date()) => dayIn(estate.value?.timeZone ?? 'UTC', now);

  /** True when the person reaches at least so far in the current estate; the server decides, menus only mirror it. */
  function can(action: Permission, atLeast: Reach = 'do'): boolean {
    if (estate.value === null) return false;
    const reach = estate.value.permissions[action];
    return reach === undefined ? may(estate.value.roles, action, atLeast) : strength[reach] >= strength[atLeast];
  }

  async function load(): Promise<void> {
    take(await http.get<Session>('/api/session'));
    const wish = readStored<{ personId: string; change: PersonChange }>('personChange');
    if (wish && wish.personId === session.value.person?.id) await changePerson(wish.change);
  }

  /** Without signal: the person who was signed in on this device last, so that a crew goes on. The server still decides when it is reached. */
  function recall(): void {
    const kept = readStored<Session>('session');
    if (kept) session.value = kept;
    isLoaded.value = true;
  }

  async function signIn(email: string, password: string): Promise<void> {
    take(await http.post<Session>('/api/session', { email, password }));
  }

  const crewOffer = (code: string) => http.post<CrewOffer>('/api/crew/people', { code });

  async function signInWithPin(typed: { code: string; personId: string; pin: string }): Promise<void> {
    take(await http.post<Session>('/api/crew/session', typed));
  }

  async function signOut(): Promise<void> {
    await http.delete('/api/session');
    await load();
  }

  async function acceptInvitation(answer: InvitationAnswer): Promise<void> {
    take(await http.post<Session>('/api/invitations/accept', answer));
  }

  /** Holds at once on this device; without signal the server is told when it is next asked who is signed in. */
  async function changePerson(change: PersonChange): Promise<void> {
    const { person } = session.value;
    try {
      take(await http.patch<Session>('/api/session/person', change));
      writeStored('personChange', null);
    } catch (error) {
      if (!(error instanceof HttpProblem && error.isOffline) || person === null) throw error;
      session.value = { ...session.value, person: { ...person, ...change } };
      writeStored('session', { ...session.value, csrfToken: '' });
      writeStored('personChange', { personId: person.id, change: { ...readStored<{ change: PersonChange }>('personChange')?.change, ...change } });
    }
  }

  function chooseEstate(id: string): void {
    estateId.value = id;
    writeStored('estate', id);
  }

  /** The server no longer knows the session: keep the words of the page, forget the person. */
  function forget(): void {
    writeStored('session', null);
    session.value = { ...nobody, csrfToken: session.value.csrfToken, demo: session.value.demo };
  }

  return { session, person, estates, estate, isLoaded, isCrewOnly, can, today, load, recall, signIn, crewOffer, signInWithPin, signOut, acceptInvitation, changePerson, chooseEstate, forget };
});
