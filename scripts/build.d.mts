/** Builds what is out of date in dist/; `only` limits it to one part. */
export function ensureBuilt(options?: { only?: 'client' | 'server' }): Promise<void>;
