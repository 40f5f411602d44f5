import { existsSync, readFileSync, readdirSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { gzipSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';

const client = resolve(import.meta.dirname, '../../dist/client');
const assets = join(client, 'assets');
const languages = ['en', 'es', 'fr', 'it', 'pt'];
/** What a crew waits for on a slow line, as it is sent: compressed. */
const budgetBytes = 200 * 1024;

const source = (file: string): string => readFileSync(join(assets, file), 'utf8');
const chunks = existsSync(assets) ? readdirSync(assets).filter((file) => file.endsWith('.js')) : [];
const chunkOf = (name: string): string => {
  const found = chunks.filter((file) => new RegExp(`^${name}-[\\w-]{8}\\.js$`, 'u').test(file));
  expect(found, `${name} is one file of the built client; run npm run build`).toHaveLength(1);
  return found[0]!;
};

/** The files that must be there before these run: what they import, and what those import. */
function neededBy(entries: readonly string[]): Set<string> {
  const needed = new Set<string>();
  const look = [...entries];
  for (let file = look.pop(); file !== undefined; file = look.pop()) {
    if (needed.has(file)) continue;
    needed.add(file);
    for (const [, imported] of source(file).matchAll(/(?:\bfrom|\bimport)\s*["']\.\/([\w.-]+\.js)["']/gu)) look.push(imported!);
  }
  return needed;
}

const sentBytes = (files: Iterable<string>): number => [...files].reduce((sum, file) => sum + gzipSync(source(file)).length, 0);

/** What opens the first screen: the page's own script, the day's work and the words of the phone. */
function firstScreen(language: string): Set<string> {
  const page = readFileSync(join(client, 'index.html'), 'utf8');
  const own = [...page.matchAll(/(?:src|href)="\/assets\/([\w.-]+\.js)"/gu)].map(([, file]) => file!);
  return neededBy([...own, chunkOf('crew'), chunkOf(`texts-${language}-phone`)]);
}

describe('the script of the crew’s phone', () => {
  it('is under 200 KB before the day’s work shows, in every language', () => {
    for (const language of languages) {
      const bytes = sentBytes(firstScreen(language));
      expect(bytes, language).toBeGreaterThan(50 * 1024);
      expect(bytes, language).toBeLessThan(budgetBytes);
    }
  });

  it('comes in few files, since each costs a weak signal its own way there and back', () => {
    for (const language of languages) expect(firstScreen(language).size, language).toBeLessThanOrEqual(6);
  });

  it('has no expression that looks behind, which is an error of the whole file to Safari before 16.4', () => {
    const files = [...firstScreen('en'), ...neededBy([chunkOf('FieldWalkView'), chunkOf('FieldBagView'), chunkOf('FieldOutboxView')])];
    expect(files.filter((file) => /\(\?<[=!]/u.test(source(file)))).toEqual([]);
  });

  it('stays under it with the walk and the bag as well, which are fetched while one reads', () => {
    for (const language of languages) expect(sentBytes([...firstScreen(language), ...neededBy([chunkOf('FieldWalkView'), chunkOf('FieldBagView')])].filter((file, at, all) => all.indexOf(file) === at)), language).toBeLessThan(budgetBytes);
  });

  it('brings neither map nor charts nor the reader of codes, and the reader is kept on the phone with the rest', () => {
    const files = [...firstScreen('en'), ...neededBy([chunkOf('FieldWalkView'), chunkOf('FieldBagView')])];
    expect(files.filter((file) => /^(maplibre|chart|draw|decode)-/u.test(file))).toEqual([]);
    const worker = readFileSync(join(client, 'sw.js'), 'utf8');
    for (const name of ['crew', 'decode', 'FieldWalkView', 'FieldBagView', 'FieldOutboxView', ...languages.map((language) => `texts-${language}-phone`)]) expect(worker, name).toContain(chunkOf(name));
    expect(worker).not.toContain(chunkOf('maplibre'));
  });
});
