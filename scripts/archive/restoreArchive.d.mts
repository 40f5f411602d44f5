import type { Manifest } from './manifest.mjs';

interface OpenedDatabase {
  url: string;
  adminUrl: string;
  addExtensions: (url: string) => Promise<unknown>;
}

export function restoreArchive(options: { archive: string; database: OpenedDatabase; filesFolder: string; migrate: (url: string) => Promise<unknown> }): Promise<Manifest>;
export function tryArchive(options: { archive: string; database: OpenedDatabase; filesFolder: string }): Promise<Manifest>;
