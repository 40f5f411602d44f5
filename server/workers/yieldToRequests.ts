import { readdirSync, readlinkSync } from 'node:fs';
import { constants, getPriority, setPriority } from 'node:os';
import { basename } from 'node:path';

/** How much nicer is what computes for minutes than the thread that answers requests. */
const YIELDED = 10;

/**
 * Niceness of what computes for minutes. The whole application may be started with a niceness of its own, so that it is counted
 * from there; found while this loads, before the process gives anything away, and handed to threads, which inherit what is left.
 */
export const yieldedNiceness = Math.min(constants.priority.PRIORITY_LOW, getPriority() + YIELDED);

/** Lets requests go first where cores are few: this thread alone is given less of them. Linux has such threads; elsewhere nothing happens. */
export function yieldToRequests(niceness: number): void {
  try {
    setPriority(Number(basename(readlinkSync('/proc/thread-self'))), niceness);
  } catch {
    // A system without threads of their own priority shares its cores evenly.
  }
}

/** The same for all threads of this process, those that compile and collect garbage too; threads made later inherit it. */
export function yieldWholeProcess(): void {
  try {
    setPriority(yieldedNiceness);
    for (const thread of readdirSync('/proc/self/task')) setPriority(Number(thread), yieldedNiceness);
  } catch {
    // Without /proc the first call speaks for all threads; a thread that has just ended has none to change.
  }
}
