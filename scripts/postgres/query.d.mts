export function query(url: string, text: string, values?: unknown[]): Promise<Record<string, unknown>[]>;
export function addExtensions(url: string): Promise<unknown>;
