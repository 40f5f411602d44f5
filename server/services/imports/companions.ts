import { fileGroups, type FileGroup } from '../../../shared/importing/fileGroups.ts';
import { auxiliaryText, worldFileEnding } from '../../importers/raster/besidePicture.ts';
import type { Companions } from '../../placing/placed.ts';
import { packTogether } from '../../storage/packTogether.ts';
import { readSmallText, type Upload } from '../../storage/uploads.ts';

export interface Accompanied {
  upload: Upload;
  companions: Companions;
  /** Files that came with it as parts of it. */
  parts: readonly Upload[];
}

const projectionFile = /\.prj$/i;
const auxiliaryFile = /\.aux\.xml$/i;
const mask = /\.msk$/i;

/** Files by what belongs together: a picture with what lies beside it, the parts of a shapefile as one archive; alone they are files like any other. */
export function withCompanions(uploads: readonly Upload[]): Promise<Accompanied[]> {
  return Promise.all(fileGroups(uploads).map(accompanied));
}

async function accompanied({ kind, main, beside }: FileGroup<Upload>): Promise<Accompanied> {
  const none = { worldFileText: null, projectionFileText: null, maskPath: null };
  if (kind === 'alone' || beside.length === 0) return { upload: main, companions: none, parts: [] };
  if (kind === 'shapefile') return { upload: await packTogether([main, ...beside], main.name.replace(/\.[^.]*$/, '.zip')), companions: none, parts: [main, ...beside] };
  const find = (ending: RegExp) => beside.find(({ name }) => ending.test(name));
  const auxiliary = auxiliaryText(await readSmallText(find(auxiliaryFile)));
  const worldFileText = (await readSmallText(find(worldFileEnding))) ?? auxiliary.worldFileText;
  const projectionFileText = (await readSmallText(find(projectionFile))) ?? auxiliary.projectionFileText;
  return { upload: main, companions: { worldFileText, projectionFileText, maskPath: find(mask)?.path ?? null }, parts: beside };
}
