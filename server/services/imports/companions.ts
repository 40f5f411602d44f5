import { readSmallText, type Upload } from '../../storage/uploads.ts';
import type { Companions } from '../../placing/placed.ts';

export interface Accompanied {
  upload: Upload;
  companions: Companions;
}

const worldFile = /\.(tfw|tifw|tiffw|wld)$/i;
const projectionFile = /\.prj$/i;
const picture = /\.tiff?$/i;

/** World and projection files go with the picture of the same name that came along; alone they are files like any other. */
export async function withCompanions(uploads: readonly Upload[]): Promise<Accompanied[]> {
  const stem = (upload: Upload) => upload.name.replace(/\.[^.]*$/, '').toLowerCase();
  const pictures = new Set(uploads.filter((upload) => picture.test(upload.name)).map(stem));
  const goesAlong = (upload: Upload) => (worldFile.test(upload.name) || projectionFile.test(upload.name)) && pictures.has(stem(upload));
  return Promise.all(
    uploads.filter((upload) => !goesAlong(upload)).map(async (upload) => {
      const beside = (pattern: RegExp) => (picture.test(upload.name) ? uploads.find((other) => pattern.test(other.name) && stem(other) === stem(upload)) : undefined);
      return { upload, companions: { worldFileText: await readSmallText(beside(worldFile)), projectionFileText: await readSmallText(beside(projectionFile)) } };
    }),
  );
}
