import { defineStore } from 'pinia';
import type { BatchAnswer, ReadingOutcome } from '../../shared/contracts/readings.ts';
import type { FieldRound } from '../../shared/contracts/rounds.ts';
import { http } from '../lib/http.ts';

/** Sheets that come back on paper. */
export const usePaperStore = defineStore('paper', () => {
  /** The walk of one person, with what their phone had sent; the whole round while nobody is chosen. */
  const walk = (estateId: string, roundId: string, person: string | null) => http.get<FieldRound>(`/api/estates/${estateId}/rounds/${roundId}`, { query: { person } });

  async function save(estateId: string, batch: { readings: object[]; findings: object[] }): Promise<ReadingOutcome[]> {
    const { outcomes, findings } = await http.post<BatchAnswer>(`/api/estates/${estateId}/readings`, batch);
    return [...outcomes, ...findings];
  }
  return { walk, save };
});
