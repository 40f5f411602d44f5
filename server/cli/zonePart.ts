import type { ZoningReadings } from '../../shared/analysis/zoningTypes.ts';
import type { PictureSums } from '../importers/raster/readRasterOntoGrids.ts';
import type { LayerArgument, ZoneArguments } from './zoneArguments.ts';
import type { Block } from './zoneFiles.ts';
import { readLayer, readPictureRows, type ReadLayer } from './zoneLayers.ts';

/**
 * The files of a command as a list of tasks that several threads take from. Plain data and shared memory, so that it can
 * cross into another thread. Who reads which file changes the time, never the outcome.
 */
export interface FileTasks {
  readonly block: Block;
  /** All layers but the shared picture. */
  readonly layers: readonly LayerArgument[];
  readonly layerWeights: ZoneArguments['layerWeights'];
  /** Read as the last task. */
  readonly readingsPath: string | null;
  /** One number in shared memory: how many tasks have been taken. */
  readonly taken: Int32Array;
  /** The largest picture, whose rows are taken by whoever is free; null when there is none worth it. */
  readonly picture: LayerArgument | null;
  /** One number in shared memory: how many bands of its rows have been taken. */
  readonly rowsTaken: Int32Array;
}

export interface FilesRead {
  readonly layers: readonly ReadLayer[];
  readonly readings: readonly ZoningReadings[];
  readonly seconds: Readonly<Record<string, number>>;
}

/** What the thread that does not finish the picture has read. */
export interface PartRead extends FilesRead {
  readonly sums: PictureSums;
}

/** Takes tasks until none is left. Throws BadInput, ImportProblem or AnalysisError for a file that cannot be used. */
export async function readTasks({ block, layers, layerWeights, readingsPath, taken }: FileTasks): Promise<FilesRead> {
  const seconds: Record<string, number> = {};
  const read: ReadLayer[] = [];
  let readings: readonly ZoningReadings[] = [];
  for (;;) {
    const task = Atomics.add(taken, 0, 1);
    const start = performance.now();
    const argument = layers[task];
    if (argument !== undefined) read.push(await readLayer(block, argument, { layerWeights }));
    else if (task === layers.length && readingsPath !== null) readings = await (await import('./zoneReadings.ts')).readReadings(block, readingsPath);
    else return { layers: read, readings, seconds };
    seconds[argument === undefined ? 'readings' : `layer ${argument.id}`] = (performance.now() - start) / 1000;
  }
}

/** Tasks first, then rows of the picture. */
export async function readPart(tasks: FileTasks): Promise<PartRead> {
  const { block, picture, rowsTaken } = tasks;
  const read = await readTasks(tasks);
  if (picture === null) return { ...read, sums: null };
  const start = performance.now();
  const sums = await readPictureRows(block, picture, rowsTaken);
  return { ...read, sums, seconds: { ...read.seconds, [`rows of ${picture.id}`]: (performance.now() - start) / 1000 } };
}
