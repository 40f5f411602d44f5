/** Longest side of a kept photo: a leaf or a label stays readable, and a weak signal carries it. */
const longestPx = 1600;

/**
 * A photo drawn anew as a JPEG. What the camera wrote into the file beside the picture (place, device, time) does not
 * come along. Throws when the file is no picture that this browser can read.
 */
export async function smallPicture(file: Blob): Promise<Blob> {
  const picture = await createImageBitmap(file);
  const scale = Math.min(1, longestPx / Math.max(picture.width, picture.height));
  const canvas = document.createElement('canvas');
  [canvas.width, canvas.height] = [Math.max(1, Math.round(picture.width * scale)), Math.max(1, Math.round(picture.height * scale))];
  canvas.getContext('2d')!.drawImage(picture, 0, 0, canvas.width, canvas.height);
  picture.close();
  return new Promise((resolve, reject) => canvas.toBlob((blob) => (blob ? resolve(blob) : reject(new Error('The picture could not be drawn'))), 'image/jpeg', 0.8));
}
