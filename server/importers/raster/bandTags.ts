import type { BandUnderstood } from '../understood.ts';
import type { GeoTags } from './geoTags.ts';
import type { RasterLayout } from './rasterLayout.ts';

/** Bands of values, and which band says where values are missing. */
export interface BandReading {
  bands: readonly BandUnderstood[];
  alphaBand: number | null;
  /** Text of the no-data tag that is not a number. */
  badNoData: string | null;
  isPalette: boolean;
  /** Name of the colours of a picture that are no measurements: CMYK, CIELAB, YCbCr; null for anything else. */
  pictureColours: string | null;
  /** Unit of the first band as the file writes it. */
  unit: string | null;
}

/** PhotometricInterpretation of TIFF 6.0 and its technical notes for colours mixed for the eye or the press. */
const pictureColours: Readonly<Record<number, string>> = { 5: 'CMYK', 6: 'YCbCr', 8: 'CIELAB', 9: 'ICCLAB', 10: 'ITULAB' };

/**
 * Scale, offset, name and no-data value of each band. A mask is not a band of values: ExtraSamples 1 or 2, an item of the
 * metadata that calls it alpha, or the last band where a person said so.
 */
export function readBands(layout: RasterLayout, tags: GeoTags, lastIsMask = false): BandReading {
  const items = metadataItems(tags.metadataXml ?? '');
  const noData = parseNoData(tags.noDataText);
  const colours = { 0: ['grey'], 1: ['grey'], 2: ['red', 'green', 'blue'], 3: ['palette'] }[tags.photometric ?? -1] ?? [];
  const firstExtra = layout.samples - tags.extraSamples.length;
  const alphaAt = tags.extraSamples.findIndex((kind) => kind === 1 || kind === 2);
  const named = items.find(({ role, text }) => role === 'colorinterp' && /^alpha$/i.test(text))?.sample ?? -1;
  const alpha = alphaAt >= 0 ? firstExtra + alphaAt : lastIsMask ? layout.samples - 1 : named;
  const alphaBand = alpha < 0 || alpha >= layout.samples || layout.samples === 1 ? null : alpha + 1;
  const type = `${layout.format === 'uint' ? 'unsigned' : layout.format === 'int' ? 'signed' : 'float'} ${layout.bits}-bit`;
  const bands = Array.from({ length: layout.samples }, (_, i): BandUnderstood => {
    const of = (role: string): string | null => items.find((item) => item.role === role && item.sample === i)?.text ?? null;
    return {
      index: i + 1,
      type,
      noData: Number.isNaN(noData) ? null : noData,
      scale: finite(of('scale'), 1),
      offset: finite(of('offset'), 0),
      description: of('description'),
      colour: colours[i] ?? null,
    };
  }).filter((band) => band.index !== alphaBand);
  return {
    bands,
    alphaBand,
    badNoData: noData === null && tags.noDataText !== null && tags.noDataText !== '' ? tags.noDataText : null,
    isPalette: tags.photometric === 3,
    pictureColours: pictureColours[tags.photometric ?? -1] ?? null,
    unit: items.find((item) => item.role === 'unittype' && item.sample === 0)?.text ?? null,
  };
}

/** The no-data tag holds text. NaN needs no value of its own: NaN is always missing. Null: no usable value. */
function parseNoData(text: string | null): number | null {
  if (text === null || text === '') return null;
  if (/^[+-]?nan$/i.test(text)) return NaN;
  if (/^[+-]?inf(inity)?$/i.test(text)) return null;
  const value = Number(text);
  return Number.isFinite(value) ? value : null;
}

function finite(text: string | null, fallback: number): number {
  const value = text === null ? NaN : Number(text);
  return Number.isFinite(value) ? value : fallback;
}

interface MetadataItem {
  role: string;
  sample: number;
  text: string;
}

/** Items of tag 42112, a small XML of `<Item name sample role>text</Item>`. */
function metadataItems(xml: string): MetadataItem[] {
  const items: MetadataItem[] = [];
  for (const match of xml.slice(0, 1_000_000).matchAll(/<Item\s([^>]{0,400})>([^<]{0,400})<\/Item>/g)) {
    const attributes = new Map([...match[1]!.matchAll(/(\w+)="([^"]*)"/g)].map((pair) => [pair[1]!, pair[2]!]));
    const role = attributes.get('role');
    const sample = attributes.get('sample');
    if (role !== undefined && sample !== undefined) items.push({ role, sample: Number(sample), text: unescapeXml(match[2]!) });
  }
  return items;
}

function unescapeXml(text: string): string {
  const named: Readonly<Record<string, string>> = { '&lt;': '<', '&gt;': '>', '&quot;': '"', '&apos;': "'", '&amp;': '&' };
  return text.replace(/&(lt|gt|quot|apos|amp);/g, (entity) => named[entity]!);
}
