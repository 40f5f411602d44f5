import { defineStore } from 'pinia';
import { shallowRef } from 'vue';
import type { z } from 'zod';
import type { estateChange, EstateFactsView, NewEstate, SeasonChange } from '../../shared/contracts/estate.ts';
import type { InvitationView, newInvitation, PersonView, rolesChange } from '../../shared/contracts/people.ts';
import type { AuditLine, MailLine } from '../../shared/contracts/records.ts';
import { http } from '../lib/http.ts';

interface Listed<Item> {
  items: Item[];
}

/** People of an estate, invitations, what was done and what was written. */
export const usePeopleStore = defineStore('people', () => {
  const people = shallowRef<readonly PersonView[]>([]);
  const invitations = shallowRef<readonly InvitationView[]>([]);

  async function load(estateId: string): Promise<void> {
    const [found, invited] = await Promise.all([http.get<Listed<PersonView>>(`/api/estates/${estateId}/people`), http.get<Listed<InvitationView>>(`/api/estates/${estateId}/invitations`)]);
    people.value = found.items;
    invitations.value = invited.items;
  }

  async function invite(estateId: string, invitation: z.input<typeof newInvitation>): Promise<void> {
    await http.post(`/api/estates/${estateId}/invitations`, invitation);
    await load(estateId);
  }

  async function resend(estateId: string, invitationId: string): Promise<void> {
    await http.post(`/api/estates/${estateId}/invitations/${invitationId}/resend`);
    await load(estateId);
  }

  async function revoke(estateId: string, invitationId: string): Promise<void> {
    await http.delete(`/api/estates/${estateId}/invitations/${invitationId}`);
    await load(estateId);
  }

  async function setRoles(estateId: string, personId: string, change: z.input<typeof rolesChange>): Promise<void> {
    await http.put(`/api/estates/${estateId}/people/${personId}/roles`, change);
    await load(estateId);
  }

  const audit = (estateId: string, before: number | null) => http.get<{ items: AuditLine[]; next: number | null }>(`/api/estates/${estateId}/audit`, { query: { before } });
  const mail = (estateId: string) => http.get<Listed<MailLine>>(`/api/estates/${estateId}/mail`);

  const facts = (estateId: string) => http.get<EstateFactsView>(`/api/estates/${estateId}/facts`);
  const changeEstate = (estateId: string, change: z.input<typeof estateChange>) => http.patch(`/api/estates/${estateId}`, change);
  const changeSeason = (estateId: string, seasonId: string, change: SeasonChange) => http.patch(`/api/estates/${estateId}/seasons/${seasonId}`, change);
  const makeEstate = (estate: NewEstate) => http.post<{ id: string }>('/api/estates', estate);

  return { people, invitations, load, invite, resend, revoke, setRoles, audit, mail, facts, changeEstate, changeSeason, makeEstate };
});
