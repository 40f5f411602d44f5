/**
 * A sending that runs once at a time. Whoever asks while it is on gets one more run right after it, since the first may
 * have looked already; any number of askers share that one.
 */
export function oneAtATime<Args extends unknown[], Result>(run: (...args: Args) => Promise<Result>): (...args: Args) => Promise<Result> {
  let current: Promise<Result> | null = null;
  let next: Promise<Result> | null = null;
  return function start(...args: Args): Promise<Result> {
    if (current === null) {
      current = run(...args).finally(() => (current = null));
      return current;
    }
    const goOn = (): Promise<Result> => {
      next = null;
      return start(...args);
    };
    next ??= current.then(goOn, goOn);
    return next;
  };
}
