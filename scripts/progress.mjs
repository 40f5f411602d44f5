// One-line messages. They go to standard error, so that programs which print a result keep standard output clean.

/** A problem the reader can solve: shown as it stands, without a stack. */
export class Problem extends Error {}

const startedAt = Date.now();

/** Says what is being done now. */
export function say(text) {
  process.stderr.write(`[${((Date.now() - startedAt) / 1000).toFixed(1).padStart(5)} s] ${text}\n`);
}

/** Runs a script's main function; a Problem ends it with its message and exit code 1. */
export async function runMain(main) {
  try {
    await main();
  } catch (error) {
    process.stderr.write(`${error instanceof Problem ? error.message : (error.stack ?? error)}\n`);
    process.exitCode = 1;
  }
}
