/** Reads one picture onto a grid over all of it, as placing does, and says what memory that took. A process of its own. */
import { gridOfOutline } from '../../shared/analysis/grid.ts';
import { toUtm, utmEpsg } from '../../shared/geo/utm.ts';
import { describeRaster } from '../../server/importers/raster/describeRaster.ts';
import { pictureOptions } from './pixelsBesideGdal.ts';
import { peakMemoryMb } from './peakMemory.ts';
import { readRasterOntoGrids } from '../../server/importers/raster/readRasterOntoGrids.ts';

const [path, cell] = process.argv.slice(2);
const asFound = pictureOptions(path!);
// Where on Earth a picture without a reference system lies changes nothing of its reading: any zone will do.
const options = (await describeRaster(path!, asFound)).reference === null ? { ...asFound, answers: { epsg: 32631 } } : asFound;
const baseMb = peakMemoryMb();
const start = performance.now();
const understood = await describeRaster(path!, options);
const ring = understood.boundsLonLat;
if (ring === null) throw new Error('It does not say where it lies.');
const epsg = utmEpsg(ring[0]!);
const grid = gridOfOutline([[[...ring, ring[0]!].map((position) => toUtm(position, epsg))]], epsg, Number(cell));
const [first, second] = understood.bands;
await readRasterOntoGrids(path!, options, { grids: [grid], quantity: second === undefined ? { kind: 'band', band: first!.index, method: 'mean' } : { kind: 'index', index: 'ndvi', bands: { red: first!.index, nir: second.index } } });
process.stdout.write(JSON.stringify({ seconds: (performance.now() - start) / 1000, baseMb, peakMb: peakMemoryMb() }));
