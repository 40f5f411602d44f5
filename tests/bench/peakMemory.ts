import { readFileSync } from 'node:fs';

/** Highest resident set of this process in MB. The kernel's own mark: `getrusage` starts from that of the parent. */
export function peakMemoryMb(): number {
  const mark = /VmHWM:\s*(\d+) kB/.exec(readFileSync('/proc/self/status', 'utf8'))?.[1];
  return (mark === undefined ? process.resourceUsage().maxRSS : Number(mark)) / 1024;
}
