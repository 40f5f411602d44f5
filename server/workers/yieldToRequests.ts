import { readdirSync, readlinkSync } from 'node:fs';
import { setPriority } from 'node:os';
import { basename } from 'node:path';

/** Niceness of what computes for minutes; 0 is that of the thread that answers requests. */
const NICENESS = 10;

/** Lets requests go first where cores are few: this thread alone is given less of them. Linux has such threads; elsewhere nothing happens. */
export function yieldToRequests(): void {
  try {
    setPriority(Number(basename(readlinkSync('/proc/thread-self'))), NICENESS);
  } catch {
    // A system without threads of their own priority shares its cores evenly.
  }
}

/** The same for all threads of this process, those that compile and collect garbage too; threads made later inherit it. */
export function yieldWholeProcess(): void {
  try {
    setPriority(NICENESS);
    for (const thread of readdirSync('/proc/self/task')) setPriority(Number(thread), NICENESS);
  } catch {
    // Without /proc the first call speaks for all threads; a thread that has just ended has none to change.
  }
}
