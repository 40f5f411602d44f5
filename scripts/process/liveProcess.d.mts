export interface ProcessIdentity { pid: number; startTicks: string }
export function identify(pid: number): ProcessIdentity | null;
export function isAlive(identity: ProcessIdentity | null): boolean;
export function parentOf(pid: number): number | null;
