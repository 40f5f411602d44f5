import { Worker } from 'node:worker_threads';
import type { BesideDone, BesideTasks } from '../cli/zoneBeside.ts';
import type { drawZones, ZonesToDraw } from '../../shared/analysis/zoningFinish.ts';
import { BadInput } from '../cli/zoneArguments.ts';
import type { FileTasks, PartRead } from '../cli/zonePart.ts';
import { fromCarried, type CarriedError } from './carriedError.ts';

/** A thread that reads files while this one reads others, and weighs the evidence while this one makes zones, and draws them. */
export interface SecondThread {
  read(tasks: FileTasks): Promise<PartRead>;
  weigh(tasks: BesideTasks): Promise<BesideDone>;
  draw(zones: ZonesToDraw): Promise<ZonesDrawn>;
  close(): void;
}

export type ZonesDrawn = ReturnType<typeof drawZones>;

export type ThreadRequest = { readonly read: FileTasks } | { readonly weigh: BesideTasks } | { readonly draw: ZonesToDraw };
export type ThreadAnswer = { readonly value: PartRead | BesideDone | ZonesDrawn } | { readonly refused: CarriedError } | { readonly bad: string } | { readonly fault: string };

/** Null when the program runs from its source, where a thread would not find its loader. */
export function openSecondThread(): SecondThread | null {
  if (import.meta.url.endsWith('.ts')) return null;
  // The GeoTIFF reader refuses to load in a thread without worker data.
  const worker = new Worker(new URL('../../scripts/zone/secondThread.mjs', import.meta.url), { workerData: {} });
  worker.unref();
  const ask = <Value>(request: ThreadRequest) =>
    new Promise<Value>((resolve, reject) => {
      worker.ref();
      worker.once('error', reject);
      worker.once('message', (answer: ThreadAnswer) => {
        worker.unref();
        worker.off('error', reject);
        if ('value' in answer) resolve(answer.value as Value);
        else reject('refused' in answer ? fromCarried(answer.refused) : 'bad' in answer ? new BadInput(answer.bad) : new Error(answer.fault));
      });
      worker.postMessage(request);
    });
  return { read: (tasks) => ask({ read: tasks }), weigh: (tasks) => ask({ weigh: tasks }), draw: (zones) => ask({ draw: zones }), close: () => void worker.terminate() };
}
