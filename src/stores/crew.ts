import { defineStore } from 'pinia';
import { shallowRef } from 'vue';
import type { CrewCodeState, NewCrewPerson, PhoneView } from '../../shared/contracts/phones.ts';
import { http } from '../lib/http.ts';

/** Shared phones of an estate: its crew code, PINs, and how the phones stand. */
export const useCrewStore = defineStore('crew', () => {
  const state = shallowRef<CrewCodeState | null>(null);
  const phones = shallowRef<readonly PhoneView[]>([]);
  const base = (estateId: string) => `/api/estates/${estateId}`;

  async function load(estateId: string): Promise<void> {
    const [found, listed] = await Promise.all([http.get<CrewCodeState>(`${base(estateId)}/crew-code`), http.get<{ items: PhoneView[] }>(`${base(estateId)}/phones`)]);
    [state.value, phones.value] = [found, listed.items];
  }
  async function makeCode(estateId: string): Promise<string> {
    const { code } = await http.post<{ code: string }>(`${base(estateId)}/crew-code`);
    await load(estateId);
    return code;
  }
  async function endCode(estateId: string): Promise<void> {
    await http.delete(`${base(estateId)}/crew-code`);
    await load(estateId);
  }
  async function add(estateId: string, person: NewCrewPerson): Promise<void> {
    await http.post(`${base(estateId)}/crew`, person);
    await load(estateId);
  }
  async function setPin(estateId: string, personId: string, pin: string): Promise<void> {
    await http.put(`${base(estateId)}/crew/${personId}/pin`, { pin });
    await load(estateId);
  }
  async function reportLost(estateId: string, phoneId: string, isLost: boolean): Promise<void> {
    await http.put(`${base(estateId)}/phones/${phoneId}/loss`, { isLost });
    await load(estateId);
  }
  return { state, phones, load, makeCode, endCode, add, setPin, reportLost };
});
