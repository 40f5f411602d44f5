import type { Manifest } from './manifest.mjs';

export function restoreArchive(options: {
  archive: string;
  database: { url: string; adminUrl: string; addExtensions: (url: string) => Promise<unknown> };
  filesFolder: string;
  migrate: (url: string) => Promise<unknown>;
}): Promise<Manifest>;
