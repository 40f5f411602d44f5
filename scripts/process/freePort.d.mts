export function anyFreePort(): Promise<number>;
export function isPortFree(port: number): Promise<boolean>;
export function nextFreePort(wanted: number): Promise<number>;
export function wantedPort(text?: string): number;
