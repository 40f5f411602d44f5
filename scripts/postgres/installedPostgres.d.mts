export interface Installed { version: number; bin: string; hasExtensions: boolean }
export function usablePostgres(): Installed | undefined;
