import { Worker } from 'node:worker_threads';
import { BadInput } from '../cli/zoneArguments.ts';
import type { FileTasks, PartRead } from '../cli/zonePart.ts';
import { fromCarried, type CarriedError } from './carriedError.ts';

/** A thread that reads files while this one reads others. */
export interface FilesThread {
  read(tasks: FileTasks): Promise<PartRead>;
  close(): void;
}

export type FilesAnswer = { readonly value: PartRead } | { readonly refused: CarriedError } | { readonly bad: string } | { readonly fault: string };

/** Null when the program runs from its source, where a thread would not find its loader. */
export function openFilesThread(): FilesThread | null {
  if (import.meta.url.endsWith('.ts')) return null;
  const entry = 'filesThreadEntry.mjs';
  // The GeoTIFF reader refuses to load in a thread without worker data.
  const worker = new Worker(new URL(entry, import.meta.url), { workerData: {} });
  worker.unref();
  return {
    read: (tasks) =>
      new Promise((resolve, reject) => {
        worker.ref();
        worker.once('error', reject);
        worker.once('message', (answer: FilesAnswer) => {
          worker.unref();
          if ('value' in answer) resolve(answer.value);
          else reject('refused' in answer ? fromCarried(answer.refused) : 'bad' in answer ? new BadInput(answer.bad) : new Error(answer.fault));
        });
        worker.postMessage(tasks);
      }),
    close: () => void worker.terminate(),
  };
}
