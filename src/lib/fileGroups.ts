const picture = /\.tiff?$/i;
const beside = /\.(tfwx?|tifwx?|tiffw|wld|prj|aux\.xml|msk)$/i;

/** Files that must travel together: a picture with its mask, its world, projection and auxiliary file. Every other file goes alone. */
export function fileGroups<F extends { readonly name: string }>(files: readonly F[]): F[][] {
  const stem = (name: string) => name.replace(beside, '').replace(picture, '').toLowerCase();
  const pictures = new Set(files.filter((file) => picture.test(file.name)).map((file) => stem(file.name)));
  const goesAlong = (file: F) => beside.test(file.name) && pictures.has(stem(file.name));
  return files.filter((file) => !goesAlong(file)).map((file) => [file, ...(picture.test(file.name) ? files.filter((other) => goesAlong(other) && stem(other.name) === stem(file.name)) : [])]);
}
