import { defineStore } from 'pinia';
import type { FieldPhotoView } from '../../shared/contracts/fieldPhotos.ts';
import { http } from '../lib/http.ts';

/** Photos of vines that came from the rows. */
export const usePhotosStore = defineStore('photos', () => {
  const list = async (estateId: string): Promise<readonly FieldPhotoView[]> => (await http.get<{ items: FieldPhotoView[] }>(`/api/estates/${estateId}/field-photos`)).items;
  const address = (estateId: string, photoId: string) => `/api/estates/${estateId}/field-photos/${photoId}`;
  return { list, address };
});
