import { defineStore } from 'pinia';
import { shallowRef } from 'vue';
import type { z } from 'zod';
import type { Role } from '../../shared/catalog/roles.ts';
import type { CellarResultView, FactorView, factorSwitch, newCellarResult } from '../../shared/contracts/factors.ts';
import type { NoticeState, NoticeView, newNotice } from '../../shared/contracts/notices.ts';
import type { newTicket, ReviewView, ticketFile, TicketReading, TicketView } from '../../shared/contracts/tickets.ts';
import { http } from '../lib/http.ts';
import { inOrder } from '../lib/inOrder.ts';

interface Listed<Item> {
  items: Item[];
}

export interface NoticePerson {
  readonly id: string;
  readonly name: string;
  readonly roles: readonly Role[];
}

/** Pick notices, scale tickets and the season's review of an estate. */
export const useHarvestStore = defineStore('harvest', () => {
  const notices = shallowRef<readonly NoticeView[]>([]);
  const people = shallowRef<readonly NoticePerson[]>([]);
  const tickets = shallowRef<readonly TicketView[]>([]);
  const review = shallowRef<ReviewView | null>(null);
  const results = shallowRef<readonly CellarResultView[]>([]);
  const factors = shallowRef<readonly FactorView[]>([]);
  const newestNotices = inOrder();
  const at = (estateId: string, path: string) => `/api/estates/${estateId}/${path}`;

  /** `knownOn`: as they stood on that day; empty for now. */
  async function loadNotices(estateId: string, knownOn = ''): Promise<void> {
    const query = { known: knownOn === '' ? null : knownOn };
    await newestNotices(() => http.get<Listed<NoticeView>>(at(estateId, 'notices'), { query }), ({ items }) => (notices.value = items));
  }

  async function loadPeople(estateId: string): Promise<void> {
    people.value = (await http.get<Listed<NoticePerson>>(at(estateId, 'notice-people'))).items;
  }

  async function send(estateId: string, lotId: string, notice: z.input<typeof newNotice>): Promise<number> {
    const { number } = await http.post<{ number: number }>(at(estateId, `lots/${lotId}/notices`), notice);
    await loadNotices(estateId);
    return number;
  }

  async function read(estateId: string, noticeId: string): Promise<void> {
    await http.post(at(estateId, `notices/${noticeId}/read`));
    await loadNotices(estateId);
  }

  async function loadReview(estateId: string): Promise<void> {
    review.value = await http.get<ReviewView>(at(estateId, 'review'));
  }

  async function loadTickets(estateId: string): Promise<void> {
    tickets.value = (await http.get<Listed<TicketView>>(at(estateId, 'tickets'))).items;
  }

  async function enter(estateId: string, ticket: z.input<typeof newTicket>): Promise<void> {
    await http.post(at(estateId, 'tickets'), ticket);
    await Promise.all([loadTickets(estateId), loadReview(estateId)]);
  }

  /** Reads a weighbridge's table back, or enters it when `apply` is set. */
  async function readTickets(estateId: string, file: z.input<typeof ticketFile>): Promise<TicketReading> {
    const reading = await http.post<TicketReading>(at(estateId, 'tickets/import'), file);
    if (file.apply === true) await Promise.all([loadTickets(estateId), loadReview(estateId)]);
    return reading;
  }

  async function loadCellar(estateId: string): Promise<void> {
    const [measured, learned] = await Promise.all([http.get<Listed<CellarResultView>>(at(estateId, 'cellar-results')), http.get<Listed<FactorView>>(at(estateId, 'factors'))]);
    results.value = measured.items;
    factors.value = learned.items;
  }

  async function enterCellar(estateId: string, lotId: string, figures: z.input<typeof newCellarResult>): Promise<void> {
    await http.post(at(estateId, `lots/${lotId}/cellar-results`), figures);
    await loadCellar(estateId);
  }

  async function switchFactor(estateId: string, change: z.input<typeof factorSwitch>): Promise<void> {
    await http.put(at(estateId, 'factors'), change);
    await loadCellar(estateId);
  }

  /** Whether a notice on paper still holds; needs no sign-in. */
  const noticeState = (code: string): Promise<NoticeState> => http.get<NoticeState>(`/api/notice-state/${code}`);

  return { results, factors, readTickets, loadCellar, enterCellar, switchFactor, noticeState, notices, people, tickets, review, loadNotices, loadPeople, send, read, loadReview, loadTickets, enter };
});
