// npm run zone -- --block … --layer …: zones of one block from files.
// The program is bundled into one folder, because finding some two hundred modules takes longer than loading them. It is
// bundled again when a source is newer.
import { existsSync, renameSync, rmSync, statSync } from 'node:fs';
import { inCheckout, root } from './checkout.mjs';
import { filesBelow } from './filesBelow.mjs';

const folder = inCheckout('dist/zone');
const program = inCheckout('dist/zone/zone.mjs');
const sources = ['server', 'shared', 'package-lock.json'];

/** By time, which costs a few milliseconds. */
function isBuilt() {
  if (!existsSync(program)) return false;
  const built = statSync(program).mtimeMs;
  return filesBelow(root, sources).every((file) => statSync(inCheckout(file)).mtimeMs <= built);
}

async function buildProgram() {
  const [{ setUp }, { withLock }, { say }] = await Promise.all([import('./setup.mjs'), import('./process/withLock.mjs'), import('./progress.mjs')]);
  await setUp();
  await withLock('build-zone', async () => {
    if (isBuilt()) return;
    say('Building the zoning program …');
    const { build } = await import('vite');
    const draft = `${folder}.draft`;
    await build({
      configFile: false,
      root,
      logLevel: 'warn',
      build: { ssr: 'server/cli/zone.ts', outDir: draft, emptyOutDir: true, copyPublicDir: false, target: 'node20', minify: true, rollupOptions: { output: { entryFileNames: 'zone.mjs', chunkFileNames: '[name].mjs' } } },
      ssr: { noExternal: true },
    });
    rmSync(folder, { recursive: true, force: true });
    renameSync(draft, folder);
  });
}

if (!isBuilt()) {
  const { runMain } = await import('./progress.mjs');
  await runMain(buildProgram);
}
if (process.exitCode === undefined) await import(program);
