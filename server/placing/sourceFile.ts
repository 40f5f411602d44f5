import type { ImportAnswers, ImportNote, ImportQuestion, UnderstoodFile } from '../../shared/contracts/imports.ts';
import type { LonLat } from '../../shared/geo/coordinates.ts';
import type { RasterReadOptions } from '../importers/raster/describeRaster.ts';
import type { Understood } from '../importers/formats.ts';
import type { ImportAnswers as ReaderAnswers, ImportQuestion as ReaderQuestion, ImportWarning } from '../importers/understood.ts';
import { evenly, rounded } from '../importers/reference/ghostSample.ts';
import type { SourceFile } from './placed.ts';

/** Options of a reader from what people answered so far. */
export function readOptionsOf({ fileName, estateLonLat, answers, companions }: SourceFile): RasterReadOptions {
  const told: ReaderAnswers = {
    ...(answers.reference === undefined ? {} : { epsg: answers.reference }),
    ...(answers.projectionText === undefined ? {} : { projectionText: answers.projectionText }),
    ...placementOf(answers.placement),
    ...(answers.noData === undefined ? {} : { noData: answers.noData }),
    ...(answers.maskBand === undefined ? {} : { maskBand: answers.maskBand }),
    ...(answers.sourceLayer === undefined ? {} : { layer: answers.sourceLayer }),
    ...(answers.xColumn === undefined ? {} : { xColumn: answers.xColumn }),
    ...(answers.yColumn === undefined ? {} : { yColumn: answers.yColumn }),
    ...(answers.swapAxes === undefined ? {} : { swapAxes: answers.swapAxes }),
    ...(answers.decimalMark === undefined ? {} : { decimalMark: answers.decimalMark }),
  };
  return { fileName, estateLonLat, answers: told, ...companions };
}

/** A nearby system chosen instead of a far place is an answer about the reference system. */
function placementOf(placement: string | undefined): ReaderAnswers {
  if (placement === undefined) return {};
  return placement === 'keep' ? { placement } : { epsg: Number(placement) };
}

/** What a reader made of a file without its contents: small enough to keep and to send. */
export function summaryOf(understood: Understood): UnderstoodFile {
  const base = { reference: understood.reference?.name ?? null, epsg: understood.epsg };
  if (understood.kind === 'raster') {
    const { width, height, pixelSizeM, compression, verticalUnit, captured } = understood;
    const bands = understood.bands.map(({ index, type, description, colour, noData }) => ({ index, type, description, colour, noData }));
    return { kind: 'raster', ...base, outlineLonLat: pairs(understood.boundsLonLat), width, height, pixelSizeM, compression, bands, verticalUnit, captured };
  }
  if (understood.kind === 'points') {
    const { columns, position, setAside, pointsLonLat } = understood;
    return {
      kind: 'points', ...base, outlineLonLat: boxOf(pointsLonLat), sampleLonLat: evenly(pointsLonLat).flatMap((position) => pairs(rounded(position))!), count: understood.count, columns: columns.map(copyField),
      position: position === null ? null : { first: position.first, second: position.second },
      setAside: setAside.map(({ reason, count }) => ({ reason, count })),
    };
  }
  const layers = understood.layers.map((layer) => ({ name: layer.name, geometryKinds: [...layer.geometryKinds], count: layer.count, fields: layer.fields.map(copyField) }));
  const positions = understood.layers.flatMap((layer) => layer.featuresLonLat.features.flatMap((feature) => (feature.geometry === null ? [] : positionsOf(feature.geometry))));
  return { kind: 'vector', ...base, outlineLonLat: boxOf(positions), sampleLonLat: evenly(positions).flatMap(([lon, lat]) => pairs(rounded([lon!, lat!]))!), layers };
}

const answerOf: Record<ReaderQuestion['code'], readonly (keyof ImportAnswers)[]> = {
  'reference-system': ['reference'],
  placement: ['placement'],
  'no-data': ['noData'],
  layer: ['sourceLayer'],
  columns: ['xColumn', 'yColumn'],
  axes: ['swapAxes'],
  'decimal-mark': ['decimalMark'],
  'mask-band': ['maskBand'],
};

/** Only these can be wrong in a way that the reader finds out: asked again, they are open again. */
const checkedByReader = new Set<keyof ImportAnswers>(['reference', 'placement']);

/** A reader's question under the names of the answers it wants; the one about columns wants two. */
export function readerQuestionsOf(question: ReaderQuestion, answers: ImportAnswers): ImportQuestion[] {
  return answerOf[question.code].map((code) => {
    const answer = answers[code] as ImportQuestion['answer'] | undefined;
    return {
      code,
      kind: 'choice',
      reason: question.text,
      ...(question.why ? { why: { code: question.why.code, params: { ...question.why.params } } } : {}),
      choices: question.choices.map((choice) => ({
        value: typedValue(code, choice.value),
        label: choice.label,
        outlineLonLat: pairs(choice.outlineLonLat ?? null),
        ...(choice.sampleLonLat ? { sampleLonLat: pairs(choice.sampleLonLat)! } : {}),
        distanceKm: choice.distanceKm ?? null,
        ...(choice.uncertaintyM ? { uncertaintyM: choice.uncertaintyM } : {}),
      })),
      suggestion: null,
      answer: answer ?? null,
      answered: answer !== undefined && !checkedByReader.has(code),
    };
  });
}

export function noteOf({ code, text, params }: ImportWarning): ImportNote {
  return { code, text, params: { ...params } };
}

function typedValue(code: string, value: string): string | number | boolean | null {
  if (code === 'reference') return Number(value);
  if (code === 'noData') return value === 'none' ? null : Number(value);
  if (code === 'maskBand') return value === 'mask';
  if (code === 'swapAxes') return value === 'true' || value === 'swap';
  return value;
}

const copyField = ({ name, kind, examples, distinct, missing }: { name: string; kind: string; examples: readonly string[]; distinct: number; missing: number }) => ({ name, kind, examples: [...examples], distinct, missing });

function pairs(ring: readonly LonLat[] | null): [number, number][] | null {
  return ring === null ? null : ring.map(([lon, lat]) => [lon, lat]);
}

/** The box around positions as a closed ring; null without positions. */
function boxOf(positions: Iterable<readonly number[]>): [number, number][] | null {
  let [west, south, east, north] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const [lon, lat] of positions) {
    west = Math.min(west, lon!);
    east = Math.max(east, lon!);
    south = Math.min(south, lat!);
    north = Math.max(north, lat!);
  }
  return west > east ? null : [[west, north], [east, north], [east, south], [west, south], [west, north]];
}

function positionsOf(geometry: GeoJSON.Geometry): number[][] {
  if (geometry.type === 'GeometryCollection') return geometry.geometries.flatMap(positionsOf);
  const flat = (nested: unknown): number[][] => (Array.isArray(nested) && typeof nested[0] === 'number' ? [nested as number[]] : (nested as unknown[]).flatMap(flat));
  return flat(geometry.coordinates);
}

/** Format by content, as the line of the file says it. */
export function formatOf(understood: Understood): string {
  return { raster: 'GeoTIFF', vector: 'shapes', points: 'table' }[understood.kind];
}
