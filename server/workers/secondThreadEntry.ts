import { parentPort } from 'node:worker_threads';
import { BadInput } from '../cli/zoneArguments.ts';
import { readPart } from '../cli/zonePart.ts';
import { toCarried } from './carriedError.ts';
import type { ThreadAnswer, ThreadRequest } from './secondThread.ts';

/** The thread's side: one answer a request. What the next request needs is loaded while it waits. */

const readers = Promise.allSettled([import('../importers/points/readPoints.ts'), import('../importers/vector/readVectors.ts'), import('../importers/raster/readRasterOntoGrids.ts')]);
const loadBeside = () => import('../cli/zoneBeside.ts');
const loadDrawing = () => import('../../shared/analysis/zoningFinish.ts');

/** `afterwards` is called when a request has been answered and all that may be asked for is loaded. */
export function listen(afterwards: () => void): void {
  parentPort!.on('message', (request: ThreadRequest) => {
    void answerTo(request).then((answer) => {
      parentPort!.postMessage(answer, largeBuffers(answer));
      if ('read' in request) void loadBeside();
      else void loadDrawing().then(afterwards);
    });
  });
}

/** Cells and sums are handed over, not copied: this thread has no more use for them. */
function largeBuffers(answer: ThreadAnswer): ArrayBuffer[] {
  if (!('value' in answer) || !('layers' in answer.value)) return [];
  const { layers, sums } = answer.value;
  return [...new Set([...layers.map(({ layer }) => layer.cells), ...(sums ?? [])].map(({ buffer }) => buffer as ArrayBuffer))];
}

async function answerTo(request: ThreadRequest): Promise<ThreadAnswer> {
  try {
    if ('draw' in request) return { value: (await loadDrawing()).drawZones(request.draw) };
    if ('weigh' in request) return { value: (await loadBeside()).doBeside(request.weigh) };
    await readers;
    return { value: await readPart(request.read) };
  } catch (error) {
    if (error instanceof BadInput) return { bad: error.message };
    const refused = toCarried(error);
    return refused === null ? { fault: error instanceof Error ? (error.stack ?? error.message) : String(error) } : { refused };
  }
}
