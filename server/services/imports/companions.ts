import { auxiliaryText, worldFileEnding } from '../../importers/raster/besidePicture.ts';
import type { Companions } from '../../placing/placed.ts';
import { readSmallText, type Upload } from '../../storage/uploads.ts';

export interface Accompanied {
  upload: Upload;
  companions: Companions;
}

const projectionFile = /\.prj$/i;
const auxiliaryFile = /\.aux\.xml$/i;
const mask = /\.msk$/i;
const picture = /\.tiff?$/i;
const endings = [worldFileEnding, projectionFile, auxiliaryFile, mask];

/** World, projection and auxiliary files and the mask go with the picture of the same name that came along; alone they are files like any other. */
export async function withCompanions(uploads: readonly Upload[]): Promise<Accompanied[]> {
  const pictures = uploads.filter((upload) => picture.test(upload.name));
  // Some are named field.tfw, some field.tif.msk.
  const belongs = (upload: Upload, ending: RegExp, to: Upload) => ending.test(upload.name) && [to.name, to.name.replace(picture, '')].some((name) => name.toLowerCase() === upload.name.replace(ending, '').toLowerCase());
  const goesAlong = (upload: Upload) => endings.some((ending) => pictures.some((each) => belongs(upload, ending, each)));
  return Promise.all(
    uploads.filter((upload) => !goesAlong(upload)).map(async (upload) => {
      const beside = (ending: RegExp) => (picture.test(upload.name) ? uploads.find((other) => belongs(other, ending, upload)) : undefined);
      const auxiliary = auxiliaryText(await readSmallText(beside(auxiliaryFile)));
      const worldFileText = (await readSmallText(beside(worldFileEnding))) ?? auxiliary.worldFileText;
      const projectionFileText = (await readSmallText(beside(projectionFile))) ?? auxiliary.projectionFileText;
      return { upload, companions: { worldFileText, projectionFileText, maskPath: beside(mask)?.path ?? null } };
    }),
  );
}
