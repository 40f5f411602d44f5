export interface ServerUser { uid?: number; gid?: number }
interface Cluster { folder: string; bin: string; user: ServerUser }
export function createCluster(options: Cluster & { superuser: string; password?: string | null }): Promise<void>;
export function startCluster(options: Cluster & { port: number; settings?: Record<string, string | number> }): Promise<void>;
export function stopCluster(options: Cluster & { mode?: 'fast' | 'immediate' }): Promise<void>;
export function runningServer(folder: string): { pid: number; port: number } | null;
export function dataVersion(folder: string): number | null;
