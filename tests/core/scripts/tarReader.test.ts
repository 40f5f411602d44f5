import { execFileSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, readFileSync, rmSync, symlinkSync, truncateSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, expect, test } from 'vitest';
import { isSafePath } from '../../../scripts/archive/manifest.mjs';
import { readTar } from '../../../scripts/archive/tarReader.mjs';

const folder = mkdtempSync(join(tmpdir(), 'tar-reader-'));
afterAll(() => rmSync(folder, { recursive: true }));

const longName = `${'deep/'.repeat(30)}leaf.tif`;
const contents: Record<string, Buffer> = {
  'empty.bin': Buffer.alloc(0),
  'block.bin': Buffer.alloc(512, 7),
  'large.bin': Buffer.from(Array.from({ length: 1_500_000 }, (_, index) => index % 251)),
  'été ß.txt': Buffer.from('accents'),
  [longName]: Buffer.from('long name'),
};

/** An archive as GNU tar itself writes it. */
function archiveOf(name: string, names: string[]): string {
  const file = join(folder, name);
  execFileSync('tar', ['--create', '--format=gnu', `--file=${file}`, '--no-recursion', `--directory=${folder}`, ...names]);
  return file;
}

async function readAll(file: string): Promise<Record<string, Buffer>> {
  const found: Record<string, Buffer> = {};
  for await (const entry of readTar(file)) {
    const chunks = [];
    for await (const chunk of entry.content()) chunks.push(Buffer.from(chunk));
    found[entry.name] = Buffer.concat(chunks);
  }
  return found;
}

for (const [name, content] of Object.entries(contents)) {
  mkdirSync(join(folder, name, '..'), { recursive: true });
  writeFileSync(join(folder, name), content);
}

test('everything that GNU tar packs is read back byte for byte, long and accented names too', async () => {
  const found = await readAll(archiveOf('whole.tar', Object.keys(contents)));
  expect(Object.keys(found)).toEqual(Object.keys(contents));
  expect(Object.keys(contents).filter((name) => !found[name]!.equals(contents[name]!))).toEqual([]);
});

test('content that nobody reads is passed over', async () => {
  const names = [];
  for await (const { name } of readTar(archiveOf('names.tar', Object.keys(contents)))) names.push(name);
  expect(names).toEqual(Object.keys(contents));
});

test('an archive that was cut off is refused wherever the cut is', async () => {
  const whole = archiveOf('cut.tar', ['large.bin', 'block.bin']);
  for (const length of [100, 512, 1000, 1_000_000, 1_501_000]) {
    const cut = archiveOf(`cut-${length}.tar`, ['large.bin', 'block.bin']);
    truncateSync(cut, length);
    await expect(readAll(cut)).rejects.toThrow(/cut off/);
  }
  expect(Object.keys(await readAll(whole))).toHaveLength(2);
});

test('a changed header, another kind of file and a link are refused', async () => {
  const changed = readFileSync(archiveOf('changed.tar', ['block.bin']));
  changed[0]! ^= 1;
  writeFileSync(join(folder, 'changed.tar'), changed);
  await expect(readAll(join(folder, 'changed.tar'))).rejects.toThrow('damaged');
  writeFileSync(join(folder, 'text.tar'), 'not an archive '.repeat(100));
  await expect(readAll(join(folder, 'text.tar'))).rejects.toThrow('not a tar archive');
  symlinkSync('/etc/passwd', join(folder, 'link'));
  await expect(readAll(archiveOf('link.tar', ['link']))).rejects.toThrow('something other than a plain file: link');
});

test('a size in base 256, which GNU tar uses from 8 GiB on, is understood', async () => {
  const bytes = readFileSync(archiveOf('base256.tar', ['été ß.txt']));
  bytes.fill(0, 124, 136);
  bytes[124] = 0x80;
  bytes[135] = 7;
  bytes.fill(0x20, 148, 156);
  const sum = bytes.subarray(0, 512).reduce((total, byte) => total + byte, 0);
  bytes.write(`${sum.toString(8).padStart(6, '0')}\0 `, 148, 'latin1');
  writeFileSync(join(folder, 'base256.tar'), bytes);
  expect(await readAll(join(folder, 'base256.tar'))).toEqual({ 'été ß.txt': Buffer.from('accents') });
});

test('a path that would leave its folder is not safe', () => {
  expect(['files/ab/cd', 'a', '..a/b'].map(isSafePath)).toEqual([true, true, true]);
  expect(['/etc/passwd', '../a', 'a/../../b', 'a//b', './a', '', 'a/'].map(isSafePath)).toEqual(Array(7).fill(false));
});
