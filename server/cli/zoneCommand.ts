import { renameSync, rmSync, writeFileSync } from 'node:fs';
import { AnalysisError } from '../../shared/analysis/analysisError.ts';
import { finishZoning, prepareZoning, zonesOfEveryNumber } from '../../shared/analysis/zoning.ts';
import type { ZoningInput, ZoningResult } from '../../shared/analysis/zoningTypes.ts';
import { ImportProblem } from '../importers/importProblem.ts';
import type { SecondThread } from '../workers/secondThread.ts';
import { BadInput, helpAskedFor, readArguments, type ZoneArguments } from './zoneArguments.ts';
import { doBeside, type BesideDone, type BesideTasks } from './zoneBeside.ts';
import { readBlock } from './zoneFiles.ts';
import { openBeside, readInputs } from './zoneInputs.ts';
import { requireResultPaths } from './zonePaths.ts';
import { zonesGeoJson, zoningReport } from './zoneReport.ts';

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
    return { exitCode: 0, line: await run(args, createStopwatch()) };
  } catch (error) {
    const isTheirs = error instanceof BadInput || error instanceof ImportProblem || error instanceof AnalysisError;
    if (isTheirs) return { exitCode: 2, line: error.message.replace(/\s*\n\s*/g, ' ') };
    return { exitCode: 1, line: `A fault of the program, please report it: ${error instanceof Error ? error.stack : String(error)}` };
  }
}

async function run(args: readonly string[], stopwatch: Stopwatch): Promise<string> {
  const asked = readArguments(args);
  requireResultPaths(asked);
  const beside = openBeside(asked);
  try {
    return await zoneFiles(asked, beside, stopwatch);
  } finally {
    beside?.close();
  }
}

async function zoneFiles(asked: ZoneArguments, beside: SecondThread | null, stopwatch: Stopwatch): Promise<string> {
  stopwatch.lap('start');
  const block = await readBlock(asked.blockPath, asked.cellSizeM);
  stopwatch.lap('block');
  const { layers, readings, secondsHere, secondsBeside } = await readInputs(block, asked, beside);
  stopwatch.split(secondsHere, 'waiting for files');
  const { zones, standardise, smoothingM, smallestPatchHa, principalComponents, seed } = asked;
  const options = { zones, standardise, smoothingM, principalComponents, seed, ...(smallestPatchHa === null ? {} : { smallestPatchHa }) };
  const input = { grid: block.grid, layers: layers.map(({ layer }) => layer), options, readings };
  const { result, seconds: secondsWeighing } = await zoneInTwo(input, beside, (stage) => stopwatch.lap(stage));
  const chosen = result.candidates[result.chosenK - 1]!;
  const geoJson = JSON.stringify(zonesGeoJson(chosen.zones));
  stopwatch.lap('write');
  const notes = Object.fromEntries(layers.map(({ layer, notes: own }) => [layer.id, own]));
  const report = zoningReport({ grid: block.grid, result, notes, secondsPerStage: stopwatch.seconds(), secondsBeside: { ...secondsBeside, ...secondsWeighing }, peakMemoryMb: Math.round(process.resourceUsage().maxRSS / 1024) });
  writeTogether([[asked.outPath, geoJson], ...(asked.reportPath === null ? [] : [[asked.reportPath, JSON.stringify(report, null, 1)] as [string, string]])]);
  return `${chosen.zones.length} ${chosen.zones.length === 1 ? 'zone' : 'zones'} on ${report.grid.areaHa.toFixed(2)} ha; verdict ${result.verdict.verdict}, advised ${result.advisedK}. Written: ${asked.outPath}`;
}

/** The zoning of `makeZoning`, with the second thread on the work beside the zones. */
async function zoneInTwo(input: ZoningInput, beside: SecondThread | null, mark: (stage: string) => void): Promise<{ result: ZoningResult; seconds: BesideDone['seconds'] }> {
  const ground = prepareZoning(input);
  mark('prepare');
  const tasks: BesideTasks = { work: ground.beside, taken: new Int32Array(new SharedArrayBuffer(4)) };
  const away = beside?.weigh(tasks) ?? null;
  const made = zonesOfEveryNumber(ground, mark);
  const here = doBeside(tasks);
  mark('evidence');
  const there = await away;
  mark('waiting for evidence');
  const result = finishZoning(ground, { made, edges: (here.edges ?? there?.edges)!, evidence: (here.evidence ?? there?.evidence)! }, mark);
  return { result, seconds: there?.seconds ?? {} };
}

/** All files or none: written beside their places first, then moved. */
function writeTogether(files: readonly (readonly [path: string, text: string])[]): void {
  const drafts = files.map(([path]) => `${path}.${process.pid}.part`);
  try {
    files.forEach(([, text], i) => writeFileSync(drafts[i]!, text));
    files.forEach(([path], i) => renameSync(drafts[i]!, path));
  } catch (error) {
    drafts.forEach((draft) => rmSync(draft, { force: true }));
    const detail = error instanceof Error ? error.message : 'unknown error';
    throw new BadInput(`The result could not be written (${detail}); check the folder and its permissions.`, { cause: error });
  }
}

interface Stopwatch {
  lap(stage: string): void;
  /** A lap whose parts were timed elsewhere; what they leave over goes to `rest`. */
  split(parts: Readonly<Record<string, number>>, rest: string): void;
  seconds(): Record<string, number>;
}

/** Seconds by stage; the first lap counts from the start of the process. */
function createStopwatch(): Stopwatch {
  const laps: Record<string, number> = {};
  let last = 0;
  return {
    lap(stage: string) {
      const now = performance.now();
      laps[stage] = (laps[stage] ?? 0) + (now - last) / 1000;
      last = now;
    },
    split(parts: Readonly<Record<string, number>>, rest: string) {
      const now = performance.now();
      const known = Object.values(parts).reduce((sum, seconds) => sum + seconds, 0);
      Object.assign(laps, parts, { [rest]: Math.max(0, (now - last) / 1000 - known) });
      last = now;
    },
    seconds: () => ({ ...laps }),
  };
}
