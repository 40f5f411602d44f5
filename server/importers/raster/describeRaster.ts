import type { LonLat } from '../../../shared/geo/coordinates.ts';
import { ImportProblem, naming } from '../importProblem.ts';
import { referenceQuestion, unusableReason } from '../reference/candidates.ts';
import { distanceKm } from '../reference/distance.ts';
import { checkPlacement } from '../reference/placement.ts';
import { datumWarning, referenceFromAnswer, referenceFromText } from '../reference/referenceSystem.ts';
import type { ImportQuestion, ImportWarning, PixelTransform, QuestionReason, RasterUnderstood, ReadOptions, ReferenceSystem } from '../understood.ts';
import { readBands } from './bandTags.ts';
import { referenceFromGeoKeys } from './geoKeyReference.ts';
import type { OpenRaster } from './openRaster.ts';
import { outlineOf, placementOf, worldFileTransform } from './pixelTransform.ts';
import { bandWarnings, verticalUnitOf } from './rasterWarnings.ts';
import { withRaster } from './withRaster.ts';

export interface RasterReadOptions extends ReadOptions {
  /** Text of the .tfw or .wld beside the file. */
  worldFileText?: string | null;
  /** Text of the .prj beside the file. */
  projectionFileText?: string | null;
  /** Where the .msk beside the file lies. */
  maskPath?: string | null;
}

/** What a GeoTIFF says about itself, with the questions it leaves open. Reads tags only. Throws ImportProblem. */
export function describeRaster(input: string | Uint8Array, options: RasterReadOptions): Promise<RasterUnderstood> {
  return naming(options.fileName, () => withRaster(input, options, async (raster, own) => describeOpen(raster, own)));
}

export function describeOpen(raster: OpenRaster, options: RasterReadOptions): RasterUnderstood {
  const { layout, tags } = raster;
  const questions: ImportQuestion[] = [];
  const warnings: ImportWarning[] = [];
  const { bands, alphaBand, ...bandNotes } = readBands(layout, tags, options.answers?.maskBand === true);
  const { transform, isPoint } = placeOf(raster, options, warnings);
  const outline = outlineOf(transform, layout);
  const reference = referenceOf(raster, { options, outline, questions, warnings });
  const placement = reference === null ? null : checkPlacement(outline, reference, options);
  questions.push(...(placement?.questions ?? []));
  warnings.push(...(placement?.warnings ?? []));
  const bounds = placement?.outlineLonLat ?? null;
  warnings.push(...bandWarnings({ raster, ...bandNotes, hasNoData: tags.noDataText !== null && bandNotes.badNoData === null }));
  const known = bounds === null ? null : reference;
  return {
    kind: 'raster',
    width: layout.width,
    height: layout.height,
    bands,
    alphaBand,
    hasMask: raster.mask !== null,
    reference: known,
    epsg: known?.epsg ?? null,
    crsName: reference?.name ?? null,
    transform,
    pixelSizeM: bounds === null ? null : pixelSizeM(bounds, layout),
    boundsLonLat: bounds,
    isPoint,
    isRotated: Math.abs(transform[2]) + Math.abs(transform[4]) > 1e-9 * (Math.abs(transform[1]) + Math.abs(transform[5])),
    compression: layout.compressionName,
    overviewFactors: raster.overviews.map((overview) => Math.round((10 * layout.width) / overview.width) / 10),
    verticalUnit: verticalUnitOf(tags.geoKeys, bandNotes.unit),
    captured: /^\d{4}:\d\d:\d\d/.test(tags.dateTime ?? '') ? tags.dateTime!.slice(0, 10).replaceAll(':', '-') : null,
    questions,
    warnings,
  };
}

function placeOf(raster: OpenRaster, options: RasterReadOptions, warnings: ImportWarning[]): { transform: PixelTransform; isPoint: boolean } {
  const placement = placementOf(raster.tags);
  if (placement.kind === 'placed') {
    if (placement.note === 'negative-scale') warnings.push({ code: 'negative-scale', text: 'Its pixel height is negative, which is unusual; the picture is taken as north up. Compare it with the block outline on the map.' });
    if (placement.note === 'corner-points') warnings.push({ code: 'corner-points', text: 'It is placed by corner points; they fit a plain rectangle and are used as such.' });
    return { transform: placement.transform, isPoint: placement.isPoint };
  }
  const fromWorldFile = options.worldFileText === undefined || options.worldFileText === null ? null : worldFileTransform(options.worldFileText);
  if (fromWorldFile !== null) return { transform: fromWorldFile, isPoint: false };
  const isWorldFileBad = placement.reason === 'none' && (options.worldFileText ?? null) !== null;
  const facts = {
    none: 'It is a picture without a place: it has no map coordinates.',
    'control-points': 'It is placed only by ground control points, which leaves its pixels bent.',
    degenerate: 'Its pixels have no size: the numbers that place it on the map are damaged.',
  };
  throw new ImportProblem({
    code: 'no-placement',
    fact: isWorldFileBad ? 'Its world file does not hold the six numbers that place a picture.' : facts[placement.reason],
    remedy: isWorldFileBad
      ? 'Export the picture again as GeoTIFF, or with its world file.'
      : placement.reason === 'control-points'
        ? 'Rectify it in the program that made it and export it again as GeoTIFF.'
        : 'Export it as GeoTIFF, or send its world file (.tfw) along with it.',
    params: { why: isWorldFileBad ? 'world-file' : placement.reason === 'none' ? 'no-place' : placement.reason },
  });
}

interface ReferenceInputs {
  options: RasterReadOptions;
  outline: readonly [number, number][];
  questions: ImportQuestion[];
  warnings: ImportWarning[];
}

function referenceOf(raster: OpenRaster, { options, outline, questions, warnings }: ReferenceInputs): ReferenceSystem | null {
  if (options.answers?.epsg !== undefined) return referenceFromAnswer(options.answers.epsg);
  const said = referenceFromGeoKeys(raster.tags.geoKeys);
  if (said.kind === 'known') {
    if (said.assumedDatum) warnings.push({ code: 'assumed-datum', text: `${said.reference.name} does not name its datum; it is taken as WGS 84, which its ellipsoid suggests.`, params: { name: said.reference.name } });
    if (said.saidUnitM !== undefined)
      warnings.push({
        code: 'unit-of-length',
        text: `It names ${said.reference.name} and says that its coordinates are counted in units of ${said.saidUnitM} m, which is not that system's own; they are taken so. Compare it with the block outline on the map.`,
        params: { name: said.reference.name, unit: String(Number(said.saidUnitM.toPrecision(7))) },
      });
    const datum = datumWarning(said.reference);
    if (datum !== null) warnings.push(datum);
    return said.reference;
  }
  const text = options.answers?.projectionText ?? options.projectionFileText ?? null;
  const fromText = text === null ? null : referenceFromText(text, 'projection file');
  if (fromText !== null && !('reason' in fromText)) return fromText;
  const why: QuestionReason = said.kind === 'none' ? { code: 'not-named', text: 'The file does not say which reference system its coordinates are in.' } : unusableReason('The file', said);
  questions.push(referenceQuestion(outline, options.estateLonLat ?? null, why));
  return null;
}

/** Root of the mean pixel area, from the two middle lines of the outline. */
function pixelSizeM(ring: readonly LonLat[], { width, height }: { width: number; height: number }): number {
  const quarter = (ring.length - 1) / 4;
  const corner = (side: number): LonLat => ring[side * quarter]!;
  const across = distanceKm(corner(0), corner(1)) * 1000;
  const down = distanceKm(corner(1), corner(2)) * 1000;
  return Number(Math.sqrt((across / width) * (down / height)).toPrecision(6));
}
