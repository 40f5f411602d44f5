import { parentPort } from 'node:worker_threads';
import { BadInput } from '../cli/zoneArguments.ts';
import { readTasks, type FileTasks } from '../cli/zonePart.ts';
import { toCarried } from './carriedError.ts';
import type { FilesAnswer } from './filesThread.ts';

/** The thread's side: takes tasks from the list it is sent and answers once. Readers are loaded while it waits. */

const readers = Promise.allSettled([import('../importers/points/readPoints.ts'), import('../importers/vector/readVectors.ts'), import('../importers/raster/readRasterOntoGrids.ts')]);

parentPort!.once('message', (tasks: FileTasks) => {
  void answerTo(tasks).then((answer) => parentPort!.postMessage(answer));
});

async function answerTo(tasks: FileTasks): Promise<FilesAnswer> {
  try {
    await readers;
    return { value: await readTasks(tasks) };
  } catch (error) {
    if (error instanceof BadInput) return { bad: error.message };
    const refused = toCarried(error);
    return refused === null ? { fault: error instanceof Error ? (error.stack ?? error.message) : String(error) } : { refused };
  }
}
