import { http } from '../lib/http.ts';
import { HttpProblem } from '../lib/httpProblem.ts';
import { fieldDatabase, type KeptClosing } from './fieldDatabase.ts';
import { oneAtATime } from './oneAtATime.ts';
import { patienceMs } from './patience.ts';

/** Notes on the phone that somebody is done with a round. The office is told when it is in reach. */
export async function addClosing(closing: Omit<KeptClosing, 'key'>): Promise<void> {
  await (await fieldDatabase()).put('closings', { ...closing, key: keyOf(closing) });
}

/** Takes the note back: the walk goes on after all. */
export async function dropClosing(closing: Pick<KeptClosing, 'personId' | 'roundId'>): Promise<void> {
  await (await fieldDatabase()).delete('closings', keyOf(closing));
}

export async function closingsOf(personId: string): Promise<KeptClosing[]> {
  return (await (await fieldDatabase()).getAll('closings')).filter((closing) => closing.personId === personId);
}

/** Tells the office, after the readings. What it declines, such as a round that was called off, is over for the phone as well. */
export const sendClosings = oneAtATime(sendAll);

async function sendAll(personId: string): Promise<void> {
  for (const closing of await closingsOf(personId)) {
    try {
      await http.patch(`/api/estates/${closing.estateId}/rounds/${closing.roundId}`, { state: 'closed' }, { withinMs: patienceMs });
    } catch (error) {
      if (!(error instanceof HttpProblem)) throw error;
      if (!isFinal(error)) return;
    }
    await dropClosing(closing);
  }
}

const isFinal = ({ status }: HttpProblem): boolean => status === 404 || status === 409 || status === 422;

function keyOf({ personId, roundId }: Pick<KeptClosing, 'personId' | 'roundId'>): string {
  return `${personId}|${roundId}`;
}
