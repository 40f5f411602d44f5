const picture = /\.tiff?$/i;
const beside = /\.(tfw|tifw|tiffw|wld|prj)$/i;

/** Files that must travel together: a picture with its world and projection file. Every other file goes alone. */
export function fileGroups<F extends { readonly name: string }>(files: readonly F[]): F[][] {
  const stem = (file: F) => file.name.replace(/\.[^.]*$/, '').toLowerCase();
  const pictures = files.filter((file) => picture.test(file.name));
  const goesAlong = (file: F) => beside.test(file.name) && pictures.some((one) => stem(one) === stem(file));
  return files.filter((file) => !goesAlong(file)).map((file) => [file, ...(picture.test(file.name) ? files.filter((other) => goesAlong(other) && stem(other) === stem(file)) : [])]);
}
