import { statSync } from 'node:fs';
import type { SecondThread } from '../workers/secondThread.ts';
import type { LayerArgument, ZoneArguments } from './zoneArguments.ts';
import type { Block } from './zoneFiles.ts';
import { formatOf, readLayer } from './zoneLayers.ts';
import { readTasks, type FilesRead, type FileTasks, type PartRead } from './zonePart.ts';

/**
 * All files of a command, read by this thread and a second one: this one begins with the largest picture, the other with the
 * other files; then either helps where something is left.
 */

export interface InputsRead extends Omit<FilesRead, 'seconds'> {
  readonly secondsHere: FilesRead['seconds'];
  readonly secondsBeside: FilesRead['seconds'];
}

/** A smaller picture is read before another thread has opened it. */
const LARGE_BYTES = 2e6;

export async function readInputs(block: Block, { layers, layerWeights, readingsPath }: ZoneArguments, beside: SecondThread | null): Promise<InputsRead> {
  const ordered = bySize(layers);
  const picture = statSync(ordered[0]!.path).size > LARGE_BYTES && (await formatOf(ordered[0]!)) === 'geotiff' ? ordered[0]! : null;
  const tasks: FileTasks = { block, layers: ordered.filter((layer) => layer !== picture), layerWeights, readingsPath, taken: counter(), picture, rowsTaken: counter() };
  const away = beside?.read(tasks) ?? null;
  // Whatever fails first is told; a failure there is met when its answer is needed.
  away?.catch(() => undefined);
  const { own, here, there } = picture === null ? { own: [], ...(await readRest(tasks, away)) } : await readWithPicture({ ...tasks, picture }, away);
  const read = [...own, ...here.layers, ...(there?.layers ?? [])];
  return {
    layers: layers.map(({ id }) => read.find(({ layer }) => layer.id === id)!),
    readings: [...here.readings, ...(there?.readings ?? [])],
    secondsHere: here.seconds,
    secondsBeside: there?.seconds ?? {},
  };
}

function counter(): Int32Array {
  return new Int32Array(new SharedArrayBuffer(4));
}

async function readRest(tasks: FileTasks, away: Promise<PartRead> | null): Promise<{ here: FilesRead; there: PartRead | null }> {
  return { here: await readTasks(tasks), there: await away };
}

/** The picture's own time is what its rows take here, without the files read before it is finished. */
async function readWithPicture(tasks: FileTasks & { picture: LayerArgument }, away: Promise<PartRead> | null) {
  const start = performance.now();
  let rest: Awaited<ReturnType<typeof readRest>> | undefined;
  let between = 0;
  const others = async () => {
    const left = performance.now();
    rest = await readRest(tasks, away);
    between = performance.now() - left;
    return rest.there?.sums ?? null;
  };
  const own = await readLayer(tasks.block, tasks.picture, { layerWeights: tasks.layerWeights, shared: { taken: tasks.rowsTaken, others } });
  const seconds = { [`layer ${tasks.picture.id}`]: (performance.now() - start - between) / 1000, ...rest!.here.seconds };
  return { own: [own], here: { ...rest!.here, seconds }, there: rest!.there };
}

/** The largest first: the last to be read then ends soon after the others. */
function bySize(layers: readonly LayerArgument[]): LayerArgument[] {
  const bytes = new Map(layers.map(({ path }) => [path, statSync(path).size]));
  return [...layers].sort((a, b) => bytes.get(b.path)! - bytes.get(a.path)!);
}
