import { existsSync, readdirSync } from 'node:fs';
import path from 'node:path';

const programs = ['initdb', 'pg_ctl', 'postgres', 'pg_dump', 'pg_restore'];
const extensions = ['postgis', 'btree_gist'];

/** Where Debian's packages put each version. */
const debianFolders = { lib: '/usr/lib/postgresql', share: '/usr/share/postgresql' };

/** Versions of the server that are installed, newest first: number, folder of programs, and whether all extensions are there. */
export function installedPostgres(folders = debianFolders) {
  if (!existsSync(folders.lib)) return [];
  return readdirSync(folders.lib)
    .filter((name) => /^\d+$/.test(name))
    .map((name) => ({ version: Number(name), bin: path.join(folders.lib, name, 'bin') }))
    .filter(({ bin }) => programs.every((program) => existsSync(path.join(bin, program))))
    .map((found) => ({ ...found, hasExtensions: extensions.every((name) => existsSync(path.join(folders.share, String(found.version), 'extension', `${name}.control`))) }))
    .sort((a, b) => b.version - a.version);
}

/** The newest installed version that can hold our data, or undefined. */
export const usablePostgres = () => installedPostgres().find(({ hasExtensions }) => hasExtensions);
