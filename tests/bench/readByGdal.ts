/**
 * Reading all pixels of a picture by GDAL in one thread, in a process of its own: the floor under anything that must decode
 * them. In: a path. Out: what the process measured of itself, or its complaint, as where python3 or GDAL is missing.
 */
import { spawnSync } from 'node:child_process';

export interface Run {
  seconds: number;
  /** Resident set before the first byte of the picture was read, and the highest after. */
  baseMb: number;
  peakMb: number;
}

const script = `
import sys, json, time
from osgeo import gdal
gdal.UseExceptions()
gdal.SetConfigOption('GDAL_NUM_THREADS', '1')
mark = lambda: next(int(line.split()[1]) for line in open('/proc/self/status') if line.startswith('VmHWM')) / 1024
base, start = mark(), time.perf_counter()
gdal.Open(sys.argv[1]).ReadAsArray()
print(json.dumps({'seconds': time.perf_counter() - start, 'baseMb': base, 'peakMb': mark()}))
`;

export const readByGdal = (path: string): Run | string => measuredRun('/usr/bin/python3', ['-c', script, path]);

/** What a process measured of itself; its complaint when it fails. */
export function measuredRun(command: string, args: readonly string[]): Run | string {
  const { status, stdout, stderr } = spawnSync(command, [...args], { encoding: 'utf8' });
  return status === 0 ? (JSON.parse(stdout) as Run) : (/(?:Error|Problem): (.*)/.exec(stderr ?? '')?.[1] ?? 'it failed');
}
