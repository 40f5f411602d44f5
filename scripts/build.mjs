// Builds client (vite) and server (tsc) into dist/, each only when its sources have changed since.
import { existsSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { pathToFileURL } from 'node:url';
import { stripVTControlCharacters } from 'node:util';
import { sourceHash } from './build/sourceHash.mjs';
import { inCheckout, npmProgram, root } from './checkout.mjs';
import { filesBelow } from './filesBelow.mjs';
import { CommandFailed, runCommand } from './process/runCommand.mjs';
import { withLock } from './process/withLock.mjs';
import { Problem, runMain, say } from './progress.mjs';
import { setUp } from './setup.mjs';

const serverFolders = ['server', 'shared', 'migrations'];

const parts = [
  {
    name: 'client',
    sources: ['src', 'shared', 'public', 'index.html', 'vite.config.ts', 'tsconfig.json', 'package-lock.json'],
    result: 'dist/client/index.html',
    command: ['vite', ['build', '--logLevel', 'warn']],
  },
  {
    name: 'server',
    sources: [...serverFolders, 'tsconfig.json', 'package-lock.json'],
    result: 'dist/server/server.js',
    command: ['tsc', ['-p', 'server/tsconfig.json']],
    // The compiler's note of its last run would make it skip files that are no longer there.
    before: () => rmSync(inCheckout('dist/server.tsbuildinfo'), { force: true }),
    after: removeOutputsWithoutSource,
  },
];

const stampOf = ({ name }) => inCheckout('dist', `${name}.stamp`);

function isCurrent(part, hash) {
  return existsSync(inCheckout(part.result)) && existsSync(stampOf(part)) && readFileSync(stampOf(part), 'utf8') === hash;
}

/** A renamed source leaves its old output behind. */
function removeOutputsWithoutSource() {
  for (const output of filesBelow(inCheckout('dist'), serverFolders)) {
    if (output.endsWith('.js') && !existsSync(inCheckout(output.replace(/\.js$/, '.ts')))) rmSync(inCheckout('dist', output));
  }
}

/** The first error is the one to mend; the bundler's colours and stack come after it. */
const firstLines = (output) => stripVTControlCharacters(output).trim().split('\n').filter((line) => !/^\s*at /.test(line)).slice(0, 40).join('\n');

async function build(part, hash) {
  say(`Building the ${part.name} …`);
  rmSync(stampOf(part), { force: true });
  part.before?.();
  const [program, args] = part.command;
  try {
    await runCommand(npmProgram(program), args, { env: { ...process.env, NODE_ENV: 'production' } });
  } catch (error) {
    if (error instanceof CommandFailed) throw new Problem(`The ${part.name} could not be built.\n${firstLines(error.output)}`);
    throw error;
  }
  part.after?.();
  writeFileSync(stampOf(part), hash);
}

/** Builds what is out of date; `only` limits it to 'client' or 'server'. */
export async function ensureBuilt({ only } = {}) {
  await withLock('build', async () => {
    const due = parts
      .filter(({ name }) => only === undefined || name === only)
      .map((part) => ({ part, hash: sourceHash(root, part.sources) }))
      .filter(({ part, hash }) => !isCurrent(part, hash));
    const results = await Promise.allSettled(due.map(({ part, hash }) => build(part, hash)));
    const failed = results.find(({ status }) => status === 'rejected');
    if (failed !== undefined) throw failed.reason;
  });
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) {
  await runMain(async () => {
    await setUp();
    await ensureBuilt();
    say('dist/ is up to date.');
  });
}
