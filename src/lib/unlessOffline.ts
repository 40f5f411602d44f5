import { HttpProblem } from './httpProblem.ts';

/** Null when there is no signal; what the server refuses is thrown on. */
export async function unlessOffline<T>(ask: () => Promise<T>): Promise<T | null> {
  return unless(ask, (problem) => problem.isOffline);
}

/** Null when there is no signal or the server declines: for what may never be in the way of work. */
export async function unlessRefused<T>(ask: () => Promise<T>): Promise<T | null> {
  return unless(ask, () => true);
}

async function unless<T>(ask: () => Promise<T>, passes: (problem: HttpProblem) => boolean): Promise<T | null> {
  try {
    return await ask();
  } catch (error) {
    if (error instanceof HttpProblem && passes(error)) return null;
    throw error;
  }
}
