import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { mkdirSync, mkdtempSync, rmSync, utimesSync, writeFileSync } from 'node:fs';
import { createServer, type AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { expect, test } from 'vitest';
import { sourceHash } from '../../../scripts/build/sourceHash.mjs';
import { isPortFree, nextFreePort, wantedPort } from '../../../scripts/process/freePort.mjs';
import { identify, isAlive, parentOf } from '../../../scripts/process/liveProcess.mjs';
import { installCommand, newestWithPostgis } from '../../../scripts/setup/debianPackages.mjs';
import { stalePackages } from '../../../scripts/setup/nodePackages.mjs';

test('a package that is missing or of another version asks for an install, one for other machines does not', () => {
  const lock = {
    packages: {
      '': { version: '0.1.0' },
      'node_modules/kept': { version: '1.0.0' },
      'node_modules/raised': { version: '2.0.0' },
      'node_modules/new': { version: '1.0.0' },
      'node_modules/binary-for-another-machine': { version: '1.0.0', optional: true },
    },
  };
  const installed = { packages: { 'node_modules/kept': { version: '1.0.0' }, 'node_modules/raised': { version: '1.9.0' }, 'node_modules/extra': { version: '1.0.0' } } };
  expect(stalePackages(lock, installed)).toEqual(['node_modules/raised', 'node_modules/new']);
  expect(stalePackages(lock, {})).toHaveLength(3);
  expect(stalePackages(lock, lock)).toEqual([]);
});

test('the newest PostgreSQL with PostGIS is chosen by number, not by spelling', () => {
  expect(newestWithPostgis(['postgresql-9-postgis-3', 'postgresql-15-postgis-3', 'postgresql-15-postgis-3-scripts', 'postgresql-17'])).toBe(15);
  expect(newestWithPostgis(['postgresql-9-postgis-3', 'postgresql-17-postgis-3'])).toBe(17);
  expect(newestWithPostgis(['postgresql-15'])).toBeNull();
});

test('installing the database forbids the default cluster, installing a browser leaves PostgreSQL alone', () => {
  expect(installCommand(['postgresql-17'])).toMatch(/create_main_cluster = false.*install .*postgresql-17/);
  expect(installCommand(['chromium'])).not.toContain('create_main_cluster');
});

test('the source hash follows names and contents, not times', () => {
  const folder = mkdtempSync(join(tmpdir(), 'source-hash-'));
  mkdirSync(join(folder, 'src'));
  writeFileSync(join(folder, 'src/a.ts'), 'one');
  const first = sourceHash(folder, ['src', 'missing.json']);
  utimesSync(join(folder, 'src/a.ts'), 1, 1);
  expect(sourceHash(folder, ['src', 'missing.json'])).toBe(first);
  writeFileSync(join(folder, 'src/a.ts'), 'two');
  const changed = sourceHash(folder, ['src']);
  expect(changed).not.toBe(first);
  rmSync(join(folder, 'src/a.ts'));
  writeFileSync(join(folder, 'src/b.ts'), 'two');
  expect(sourceHash(folder, ['src'])).not.toBe(changed);
  rmSync(folder, { recursive: true });
});

test('a taken port is passed over for the next free one', async () => {
  const server = createServer().listen(0, '127.0.0.1');
  await once(server, 'listening');
  const { port } = server.address() as AddressInfo;
  expect(await isPortFree(port)).toBe(false);
  expect(await nextFreePort(port)).toBeGreaterThan(port);
  server.close();
  await once(server, 'close');
  expect(await nextFreePort(port)).toBe(port);
});

test('PORT is 3000 when absent, and a wrong one is named', () => {
  expect(wantedPort('')).toBe(3000);
  expect(wantedPort('8080')).toBe(8080);
  expect(() => wantedPort('80a')).toThrow('PORT is "80a"');
  expect(() => wantedPort('70000')).toThrow('PORT is "70000"');
});

test('a process is known by number and start time, so that its number in other hands is not taken for it', async () => {
  const child = spawn('sleep', ['30']);
  const identity = identify(child.pid!)!;
  expect(isAlive(identity)).toBe(true);
  expect(parentOf(child.pid!)).toBe(process.pid);
  expect(isAlive({ ...identity, startTicks: '1' })).toBe(false);
  child.kill('SIGKILL');
  await once(child, 'exit');
  expect(isAlive(identity)).toBe(false);
});
