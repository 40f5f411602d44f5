import { openZip } from '../archive/zipArchive.ts';
import { withSource } from '../byteSource.ts';
import { naming } from '../importProblem.ts';

/** A TIFF from an archive with the small files beside it. */
export interface PackedRaster {
  name: string;
  bytes: Uint8Array<ArrayBuffer>;
  worldFileText: string | null;
  projectionFileText: string | null;
}

/** TIFFs in a ZIP, unpacked in memory; empty when there are none. Throws ImportProblem for an unsafe or damaged archive. */
export function rastersInArchive(input: string | Uint8Array, fileName: string): Promise<PackedRaster[]> {
  return naming(fileName, () =>
    withSource(input, async (source) => {
      const archive = openZip(source);
      const text = (wanted: RegExp, stem: string): string | null => {
        const entry = archive.entries.find(({ name }) => wanted.test(name) && name.replace(/\.[^.]*$/, '').toLowerCase() === stem.toLowerCase());
        return entry === undefined ? null : new TextDecoder().decode(archive.read(entry).subarray(0, 20_000));
      };
      return archive.entries
        .filter(({ name }) => /\.tiff?$/i.test(name) && !name.includes('__MACOSX/'))
        .map((entry) => {
          const stem = entry.name.replace(/\.[^.]*$/, '');
          return { name: entry.name.split('/').pop()!, bytes: archive.read(entry), worldFileText: text(/\.(tfw|tifw|wld)$/i, stem), projectionFileText: text(/\.prj$/i, stem) };
        });
    }),
  );
}
