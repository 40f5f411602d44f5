import { statSync } from 'node:fs';
import { openFilesThread, type FilesThread } from '../workers/filesThread.ts';
import type { LayerArgument, ZoneArguments } from './zoneArguments.ts';
import { requireFile, type Block } from './zoneFiles.ts';
import { readTasks, type FileTasks, type PartRead } from './zonePart.ts';

/** All files of a command, read by this thread and a second one that take them from one list. */

export interface InputsRead extends Omit<PartRead, 'seconds'> {
  readonly secondsHere: PartRead['seconds'];
  readonly secondsBeside: PartRead['seconds'];
}

/** Opened before the block is read, so that the thread has loaded its readers by then. Null when one thread is as good. */
export function openBeside({ layers, readingsPath }: ZoneArguments): FilesThread | null {
  for (const layer of layers) requireFile(layer.path, `--layer ${layer.id}`);
  return layers.length + (readingsPath === null ? 0 : 1) > 1 ? openFilesThread() : null;
}

export async function readInputs(block: Block, { layers, layerWeights, readingsPath }: ZoneArguments, beside: FilesThread | null): Promise<InputsRead> {
  const tasks: FileTasks = { block, layers: bySize(layers), layerWeights, readingsPath, taken: new Int32Array(new SharedArrayBuffer(4)) };
  // Whatever fails first is told; the other part is then of no interest.
  const [here, there] = await Promise.all([readTasks(tasks), beside === null ? null : beside.read(tasks)]);
  const read = [...here.layers, ...(there?.layers ?? [])];
  return {
    layers: layers.map(({ id }) => read.find(({ layer }) => layer.id === id)!),
    readings: [...here.readings, ...(there?.readings ?? [])],
    secondsHere: here.seconds,
    secondsBeside: there?.seconds ?? {},
  };
}

/** The largest first: the last to be read then ends soon after the others. */
function bySize(layers: readonly LayerArgument[]): LayerArgument[] {
  const bytes = new Map(layers.map(({ path }) => [path, statSync(path).size]));
  return [...layers].sort((a, b) => bytes.get(b.path)! - bytes.get(a.path)!);
}
