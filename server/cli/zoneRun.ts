import { renameSync, rmSync, writeFileSync } from 'node:fs';
import { prepareZoning, zonesOfEveryNumber } from '../../shared/analysis/zoning.ts';
import type { VerdictResult } from '../../shared/analysis/verdict.ts';
import { concludeEvidence } from '../../shared/analysis/zoningEvidence.ts';
import { decideZones, drawZones, figuresOfZones, zoningRecord } from '../../shared/analysis/zoningFinish.ts';
import type { ZoningInput, ZoningResult } from '../../shared/analysis/zoningTypes.ts';
import type { SecondThread } from '../workers/secondThread.ts';
import { BadInput, type ZoneArguments } from './zoneArguments.ts';
import { doBeside, type BesideDone, type BesideOutcome, type BesideTasks } from './zoneBeside.ts';
import { readBlock } from './zoneFiles.ts';
import { readInputs } from './zoneInputs.ts';
import { zonesGeoJson, zoningReport } from './zoneReport.ts';

/** The work of the command. Out: one line that says what was made. Throws for input that cannot be used, with nothing written. */
export async function zoneFromFiles(asked: ZoneArguments, beside: SecondThread | null): Promise<string> {
  const stopwatch = createStopwatch();
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
  return `${chosen.zones.length} ${chosen.zones.length === 1 ? 'zone' : 'zones'} on ${report.grid.areaHa.toFixed(2)} ha; ${verdictInWords(result.verdict)}, advised ${result.advisedK}. Written: ${asked.outPath}`;
}

/** The bare verdict where the layers alone cannot tell would be taken for one. */
function verdictInWords({ verdict, isJudged, reasons }: VerdictResult): string {
  if (isJudged) return `verdict ${verdict}`;
  return reasons.some(({ code }) => code === 'too-small') ? 'too small to judge from layers alone' : 'no measured layer to judge from';
}

/** The zoning of `makeZoning`, with the second thread on the work beside the zones, then on their polygons. */
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
  const { edges, ...parts } = { ...here.outcome, ...there?.outcome } as BesideOutcome;
  const found = { made, edges, evidence: concludeEvidence(ground.beside.evidence, parts) };
  const decided = decideZones(ground, found);
  mark('number');
  const drawnAway = beside?.draw(decided.toDraw) ?? null;
  const figures = figuresOfZones(ground, decided, mark);
  const drawn = (await drawnAway) ?? drawZones(decided.toDraw);
  mark('polygons');
  return { result: zoningRecord(ground, found, { decided, drawn, figures }), seconds: there?.seconds ?? {} };
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
