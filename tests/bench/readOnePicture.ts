/** Reads one picture onto a grid over all of it, as placing does, and says what memory that took. A process of its own. */
import { gridOfOutline } from '../../shared/analysis/grid.ts';
import { toUtm, utmEpsg } from '../../shared/geo/utm.ts';
import { inspectRaster } from '../../server/importers/raster/inspectRaster.ts';
import { readRasterOntoGrids } from '../../server/importers/raster/readRasterOntoGrids.ts';

const [path, cell] = process.argv.slice(2);
const options = { fileName: 'picture.tif' };
const { understood } = await inspectRaster(path!, options);
const ring = understood.boundsLonLat;
if (ring === null) throw new Error('It does not say where it lies.');
const epsg = utmEpsg(ring[0]!);
const grid = gridOfOutline([[[...ring, ring[0]!].map((position) => toUtm(position, epsg))]], epsg, Number(cell));
const [first, second] = understood.bands;
await readRasterOntoGrids(path!, options, { grids: [grid], quantity: second === undefined ? { kind: 'band', band: first!.index, method: 'mean' } : { kind: 'index', index: 'ndvi', bands: { red: first!.index, nir: second.index } } });
process.stdout.write(JSON.stringify({ peakMb: process.resourceUsage().maxRSS / 1024 }));
