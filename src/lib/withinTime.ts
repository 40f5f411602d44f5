interface Limits {
  readonly signal?: AbortSignal;
  readonly withinMs?: number;
}

/** Options of a request with a signal that ends it after its time. Not `AbortSignal.timeout`: phones of 2021 lack it. */
export function withinTime<Options extends Limits>(options: Options): Options {
  if (options.withinMs === undefined) return options;
  const giveUp = new AbortController();
  setTimeout(() => giveUp.abort(new DOMException('No answer in time.', 'TimeoutError')), options.withinMs);
  options.signal?.addEventListener('abort', () => giveUp.abort());
  return { ...options, signal: giveUp.signal };
}
