// npm run zone -- --block … --layer …: zones of one block from files.
// The program is bundled into one folder, because finding some two hundred modules takes longer than loading them. It is
// bundled again when a source is newer.
import { existsSync, readFileSync, renameSync, rmSync, statSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { setFlagsFromString } from 'node:v8';
import { inCheckout, root } from './checkout.mjs';
import { loadProgram } from './zone/keptCode.mjs';

const folder = inCheckout('dist/zone');
const program = inCheckout('dist/zone/zone.cjs');
const sourceList = inCheckout('dist/zone/sources.json');

/** By the times of the files that went into it, which costs a few milliseconds. */
function isBuilt() {
  if (!existsSync(program) || !existsSync(sourceList)) return false;
  const built = statSync(program).mtimeMs;
  const sources = JSON.parse(readFileSync(sourceList, 'utf8'));
  return sources.every((file) => (statSync(inCheckout(file), { throwIfNoEntry: false })?.mtimeMs ?? Infinity) <= built);
}

async function buildProgram() {
  const [{ setUp }, { withLock }, { say }] = await Promise.all([import('./setup.mjs'), import('./process/withLock.mjs'), import('./progress.mjs')]);
  await setUp();
  await withLock('build-zone', async () => {
    if (isBuilt()) return;
    say('Building the zoning program …');
    const { build } = await import('vite');
    const draft = `${folder}.draft`;
    const { output } = await build({
      configFile: false,
      root,
      logLevel: 'warn',
      build: {
        ssr: true,
        outDir: draft,
        emptyOutDir: true,
        copyPublicDir: false,
        target: 'node20',
        minify: true,
        rollupOptions: {
          input: { zone: 'server/cli/zone.ts', secondThreadEntry: 'server/workers/secondThreadEntry.ts' },
          output: { format: 'cjs', entryFileNames: '[name].cjs', chunkFileNames: '[name].cjs' },
        },
      },
      // It looks for its WebAssembly beside its own file.
      ssr: { noExternal: true, external: ['sql.js'] },
    });
    const own = output.flatMap(({ moduleIds = [] }) => moduleIds).filter((id) => id.startsWith(root) && !id.includes('node_modules'));
    const sources = [...new Set(own)].map((id) => path.relative(root, id)).sort();
    writeFileSync(path.join(draft, 'sources.json'), JSON.stringify(['package-lock.json', 'scripts/zone.mjs', ...sources]));
    rmSync(folder, { recursive: true, force: true });
    renameSync(draft, folder);
  });
}

if (!isBuilt()) {
  const { runMain } = await import('./progress.mjs');
  await runMain(buildProgram);
}
// A run is over before much of its code pays back what optimising it costs: plainer code for it takes a tenth less CPU.
for (const flag of ['--no-turbo-loop-peeling', '--max-inlined-bytecode-size=100', '--max-inlined-bytecode-size-cumulative=200']) setFlagsFromString(flag);
if (process.exitCode === undefined) {
  const { exports, keep } = loadProgram(program, inCheckout('dist/zone/main.code'));
  await exports.main(process.argv.slice(2));
  keep();
}
