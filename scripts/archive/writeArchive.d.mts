import type { Manifest } from './manifest.mjs';

export function writeArchive(options: { url: string; filesFolder: string; target: string; createdAt?: Date }): Promise<Manifest>;
