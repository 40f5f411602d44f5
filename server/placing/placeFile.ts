import { understandAgain } from '../importers/formats.ts';
import { ImportProblem } from '../importers/importProblem.ts';
import { speedColumn } from '../importers/points/speedColumn.ts';
import type { PlaceInput, PlacedLayer } from './placed.ts';
import { placePoints } from './placePoints.ts';
import { placeRaster } from './placeRaster.ts';
import { placeShapes } from './placeShapes.ts';
import { readOptionsOf } from './sourceFile.ts';

type Progress = (stage: string, progress: number) => void;

/**
 * The layers that a file makes on the given blocks, following the answers about it; blocks that it does not reach are left
 * out. Throws ImportProblem when it reaches none, or an answer does not fit the file.
 */
export async function placeFile(input: PlaceInput, report: Progress): Promise<PlacedLayer[]> {
  report('reading', 0);
  const layers = await layersOf(input, report);
  if (layers[0]!.blocks.length === 0) {
    const what = input.blocks.length === 1 ? 'the block' : 'any of the blocks';
    throw new ImportProblem({ code: 'no-values', fact: `It has no values on ${what}.`, remedy: 'Check that it is the right file, band or field, and where it lies on the map.', file: input.source.fileName });
  }
  return layers;
}

async function layersOf(input: PlaceInput, report: Progress): Promise<PlacedLayer[]> {
  const { source } = input;
  const understood = await understandAgain(source.path, readOptionsOf(source));
  if (understood.kind === 'raster') return placeRaster(input, understood, report);
  if (understood.kind === 'vector') return placeShapes(input, understood);
  const name = source.answers.attribute!;
  const value = understood.numbers.get(name);
  if (value === undefined) throw new ImportProblem({ code: 'bad-request', fact: `Its column "${name}" holds no numbers.`, remedy: 'Choose another column.', params: { column: name }, file: source.fileName });
  const speed = speedColumn(understood.numbers.keys());
  return placePoints(input, { lonLat: understood.pointsLonLat, value, speed: speed === null ? undefined : understood.numbers.get(speed) }, { name, reference: understood.reference?.name ?? null });
}
