import { AnalysisError } from '../../shared/analysis/analysisError.ts';
import { ImportProblem } from '../importers/importProblem.ts';
import { openSecondThread } from '../workers/secondThread.ts';
import { BadInput, helpAskedFor, readArguments } from './zoneArguments.ts';
import { requireFile, requireResultPaths } from './zonePaths.ts';

/**
 * Zones of one block from files, without server or database.
 * Exit code 0 done; 2 input that cannot be used, with one line on standard error and nothing written; 1 a fault of ours.
 */

export interface CommandOutcome {
  readonly exitCode: 0 | 1 | 2;
  /** For standard output when done, for standard error otherwise; one line, or the help that was asked for. */
  readonly line: string;
}

/** Runs the command to its end; never throws. */
export async function runZoneCommand(args: readonly string[]): Promise<CommandOutcome> {
  const help = helpAskedFor(args);
  if (help !== null) return { exitCode: 0, line: help };
  try {
    return { exitCode: 0, line: await run(args) };
  } catch (error) {
    const isTheirs = error instanceof BadInput || error instanceof ImportProblem || error instanceof AnalysisError;
    if (isTheirs) return { exitCode: 2, line: error.message.replace(/\s*\n\s*/g, ' ') };
    return { exitCode: 1, line: `A fault of the program, please report it: ${error instanceof Error ? error.stack : String(error)}` };
  }
}

/** The second thread starts first: it loads its readers while this one loads what makes the zones. */
async function run(args: readonly string[]): Promise<string> {
  const asked = readArguments(args);
  requireResultPaths(asked);
  for (const layer of asked.layers) requireFile(layer.path, `--layer ${layer.id}`);
  const beside = openSecondThread();
  try {
    const { zoneFromFiles } = await import('./zoneRun.ts');
    return await zoneFromFiles(asked, beside);
  } finally {
    beside?.close();
  }
}
