export function sourceHash(base: string, names: string[]): string;
