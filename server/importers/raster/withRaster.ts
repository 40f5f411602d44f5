import { openZip } from '../archive/zipArchive.ts';
import { isPackerRubbish } from '../archive/zipDirectory.ts';
import { fromBytes, withSource, type ByteSource } from '../byteSource.ts';
import { ImportProblem } from '../importProblem.ts';
import type { RasterReadOptions } from './describeRaster.ts';
import { auxiliaryText, worldFileEnding } from './besidePicture.ts';
import { openRaster, type OpenRaster } from './openRaster.ts';

/**
 * Opens a TIFF, or the one TIFF in a ZIP with the small files beside it, and closes it again. A packed TIFF is unpacked
 * in memory. Throws ImportProblem.
 */
export function withRaster<T>(input: string | Uint8Array, options: RasterReadOptions, use: (raster: OpenRaster, options: RasterReadOptions) => Promise<T>): Promise<T> {
  return withSource(input, async (source) => {
    if (!startsAsZip(source)) return (options.maskPath ?? null) === null ? use(await openRaster(source), options) : withSource(options.maskPath!, async (mask) => use(await openRaster(source, mask), options));
    const packed = unpack(source);
    return use(await openRaster(fromBytes(packed.bytes), packed.mask === null ? null : fromBytes(packed.mask)), {
      ...options,
      worldFileText: options.worldFileText ?? packed.worldFileText,
      projectionFileText: options.projectionFileText ?? packed.projectionFileText,
    });
  });
}

/** The TIFFs a ZIP holds. */
export function tiffNames(source: ByteSource): string[] {
  return startsAsZip(source) ? openZip(source).entries.filter(({ name }) => /\.tiff?$/i.test(name) && !isPackerRubbish(name)).map(({ name }) => name) : [];
}

interface PackedRaster {
  bytes: Uint8Array;
  worldFileText: string | null;
  projectionFileText: string | null;
  mask: Uint8Array | null;
}

function unpack(source: ByteSource): PackedRaster {
  const archive = openZip(source);
  const names = tiffNames(source);
  if (names.length !== 1) throw new ImportProblem({ code: 'no-layer', fact: `The archive holds ${names.length} TIFF files.`, remedy: 'Send them one at a time.', params: { why: 'several-pictures', count: names.length } });
  const stem = names[0]!.replace(/\.[^.]*$/, '').toLowerCase();
  const beside = (ending: RegExp): Uint8Array | null => {
    const entry = archive.entries.find(({ name }) => ending.test(name) && [stem, names[0]!.toLowerCase()].includes(name.replace(ending, '').toLowerCase()));
    return entry === undefined ? null : archive.read(entry);
  };
  const text = (ending: RegExp): string | null => {
    const bytes = beside(ending);
    return bytes === null ? null : new TextDecoder().decode(bytes.subarray(0, 20_000));
  };
  const aux = auxiliaryText(text(/\.aux\.xml$/i));
  const bytes = archive.read(archive.entries.find(({ name }) => name === names[0])!);
  return { bytes, worldFileText: text(worldFileEnding) ?? aux.worldFileText, projectionFileText: text(/\.prj$/i) ?? aux.projectionFileText, mask: beside(/\.msk$/i) };
}

function startsAsZip(source: ByteSource): boolean {
  return source.size >= 4 && new DataView(source.read(0, 4).buffer).getUint32(0, true) === 0x04034b50;
}
