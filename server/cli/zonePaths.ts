import { accessSync, constants, existsSync, realpathSync, statSync } from 'node:fs';
import { basename, dirname, join, resolve } from 'node:path';
import { BadInput, type ZoneArguments } from './zoneArguments.ts';

/** Throws BadInput. */
export function requireFile(path: string, option: string): void {
  if (!existsSync(path) || !statSync(path).isFile()) throw new BadInput(`${option}: the file ${path} does not exist; check its name and folder.`);
}

/** Whether the results can be written, looked at before minutes of work and so that nothing that was given is lost. Throws BadInput. */
export function requireResultPaths({ outPath, reportPath, blockPath, layers, readingsPath }: ZoneArguments): void {
  const given = new Map([['--block', blockPath], ...layers.map(({ id, path }) => [`--layer ${id}`, path] as const), ...(readingsPath === null ? [] : [['--readings', readingsPath] as const])]);
  const results = [['--out', outPath], ...(reportPath === null ? [] : [['--report', reportPath]])] as const;
  for (const [option, path] of results) {
    requireFolderOf(path!);
    if (existsSync(path!) && statSync(path!).isDirectory()) throw new BadInput(`${option}: ${path} is a folder; give the name of a file in it.`);
    for (const [input, inputPath] of given) if (samePlace(path!, inputPath)) throw new BadInput(`${option} would write over the file given with ${input}; give another name.`);
  }
  if (reportPath !== null && samePlace(outPath, reportPath)) throw new BadInput(`--out and --report name the same file, ${outPath}; give the report another name.`);
}

function requireFolderOf(path: string): void {
  const folder = dirname(resolve(path));
  if (!existsSync(folder) || !statSync(folder).isDirectory()) throw new BadInput(`The folder ${folder} does not exist; make it first or write elsewhere.`);
  try {
    accessSync(folder, constants.W_OK);
  } catch (error) {
    throw new BadInput(`Nothing can be written into the folder ${folder}; change its permissions or write elsewhere.`, { cause: error });
  }
}

/** Links are followed, and a file need not be there yet. */
function samePlace(one: string, other: string): boolean {
  return placeOf(one) === placeOf(other);
}

function placeOf(path: string): string {
  if (existsSync(path)) return realpathSync(path);
  const folder = dirname(resolve(path));
  return join(existsSync(folder) ? realpathSync(folder) : folder, basename(path));
}
