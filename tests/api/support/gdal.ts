import { execFileSync } from 'node:child_process';
import type { FeatureCollection } from 'geojson';

/** Whether a program of the machine can be called, so that a check by another reader runs where there is one. */
export function hasTool(tool: string): boolean {
  try {
    execFileSync(tool, [tool === 'pdftotext' ? '-v' : '--version'], { stdio: 'ignore' });
    return true;
  } catch {
    return false;
  }
}

/** What GDAL's own reader makes of a file (or of one layer in it), as GeoJSON with many decimals. */
export function readWithGdal<Features extends FeatureCollection>(file: string, layer?: string): Features {
  const out = execFileSync('ogr2ogr', ['-f', 'GeoJSON', '-lco', 'COORDINATE_PRECISION=10', '-nlt', 'PROMOTE_TO_MULTI', '/vsistdout/', file, ...(layer === undefined ? [] : [layer])], { encoding: 'utf8', maxBuffer: 1e8 });
  return JSON.parse(out) as Features;
}
