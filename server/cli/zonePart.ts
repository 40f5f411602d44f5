import type { ZoningReadings } from '../../shared/analysis/zoningTypes.ts';
import type { LayerArgument, ZoneArguments } from './zoneArguments.ts';
import type { Block } from './zoneFiles.ts';
import { readLayer, type ReadLayer } from './zoneLayers.ts';

/**
 * The files of a command as a list of tasks that several threads take from. Plain data and shared memory, so that it can
 * cross into another thread. Who reads which file changes the time, never the outcome.
 */
export interface FileTasks {
  readonly block: Block;
  readonly layers: readonly LayerArgument[];
  readonly layerWeights: ZoneArguments['layerWeights'];
  /** Read as the last task. */
  readonly readingsPath: string | null;
  /** One number in shared memory: how many tasks have been taken. */
  readonly taken: Int32Array;
}

export interface PartRead {
  readonly layers: readonly ReadLayer[];
  readonly readings: readonly ZoningReadings[];
  readonly seconds: Readonly<Record<string, number>>;
}

/** Takes tasks until none is left. Throws BadInput, ImportProblem or AnalysisError for a file that cannot be used. */
export async function readTasks(tasks: FileTasks): Promise<PartRead> {
  const { block, layers, layerWeights, readingsPath, taken } = tasks;
  const seconds: Record<string, number> = {};
  const read: ReadLayer[] = [];
  let readings: readonly ZoningReadings[] = [];
  for (;;) {
    const task = Atomics.add(taken, 0, 1);
    const start = performance.now();
    const argument = layers[task];
    if (argument !== undefined) read.push(await readLayer(block, argument, layerWeights));
    else if (task === layers.length && readingsPath !== null) readings = await (await import('./zoneReadings.ts')).readReadings(block, readingsPath);
    else return { layers: read, readings, seconds };
    seconds[argument === undefined ? 'readings' : `layer ${argument.id}`] = (performance.now() - start) / 1000;
  }
}
