import { ref, shallowRef, type Ref, type ShallowRef } from 'vue';
import { HttpProblem } from '../lib/httpProblem.ts';

export interface Ask<Result, Args extends unknown[]> {
  data: ShallowRef<Result | null>;
  problem: ShallowRef<HttpProblem | null>;
  isBusy: Ref<boolean>;
  /** Resolves with true when it went well; a problem of the server stays in `problem`, other errors are thrown. */
  run: (...args: Args) => Promise<boolean>;
}

/** A request with its states: what came, what went wrong, whether it is under way. The newest answer wins. */
export function useAsk<Result, Args extends unknown[]>(request: (...args: Args) => Promise<Result>): Ask<Result, Args> {
  const data = shallowRef<Result | null>(null);
  const problem = shallowRef<HttpProblem | null>(null);
  const isBusy = ref(false);
  let newest = 0;

  async function run(...args: Args): Promise<boolean> {
    const mine = ++newest;
    isBusy.value = true;
    problem.value = null;
    try {
      const result = await request(...args);
      if (mine === newest) data.value = result;
      return true;
    } catch (error) {
      if (!(error instanceof HttpProblem)) throw error;
      if (mine === newest) problem.value = error;
      return false;
    } finally {
      if (mine === newest) isBusy.value = false;
    }
  }
  return { data, problem, isBusy, run };
}
