import type { ServerUser } from './cluster.mjs';

export function serverUser(existingFolder?: string): Promise<ServerUser>;
