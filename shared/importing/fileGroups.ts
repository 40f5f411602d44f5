/** Files that were sent together and are parts of one: a picture with what lies beside it, the parts of a shapefile. */

export interface FileGroup<F> {
  readonly kind: 'picture' | 'shapefile' | 'alone';
  /** The file that the others belong to. */
  readonly main: F;
  readonly beside: readonly F[];
}

const picture = /\.tiff?$/i;
/** World, projection and auxiliary files, mask, overviews, and what other programs keep of their own. */
const besidePicture = /\.(tfwx?|tifwx?|tiffw|wld|prj|aux\.xml|xml|msk|ovr|rrd|aux|vat\.dbf|vat\.cpg)$/i;
const shapes = /\.shp$/i;
const besideShapes = /\.(shx|dbf|prj|cpg|qpj|qix|cst|qmd|sbn|sbx|shp\.xml|idm|ind|fbn|fbx|ain|aih|ixs|mxs|atx)$/i;
/** Parts that nothing but a shapefile has. */
const onlyOfShapes = /\.(shx|dbf)$/i;

/**
 * Groups by name, whatever its case: field.tif and field.tif.msk, field.shp and field.dbf. Parts of a shapefile that lack its
 * .shp are a group too, so that they are refused once. Every other file is alone; the order is that of the main files.
 */
export function fileGroups<F extends { readonly name: string }>(files: readonly F[]): FileGroup<F>[] {
  const pictures = stemsOf(files, picture);
  const layers = stemsOf(files, shapes);
  const loose = stemsOf(files, onlyOfShapes);
  const ofPicture = ({ name }: F) => besidePicture.test(name) && pictures.has(stemOf(stemOf(name, besidePicture), picture));
  const ofShapes = ({ name }: F) => besideShapes.test(name) && (layers.has(stemOf(name, besideShapes)) || loose.has(stemOf(name, besideShapes)));
  const groups: FileGroup<F>[] = [];
  const taken = new Set<F>();
  for (const main of files) {
    if (taken.has(main)) continue;
    if (picture.test(main.name)) {
      const stem = stemOf(main.name, picture);
      groups.push({ kind: 'picture', main, beside: files.filter((other) => other !== main && ofPicture(other) && stemOf(stemOf(other.name, besidePicture), picture) === stem) });
    } else if (shapes.test(main.name)) {
      const stem = stemOf(main.name, shapes);
      groups.push({ kind: 'shapefile', main, beside: files.filter((other) => ofShapes(other) && stemOf(other.name, besideShapes) === stem) });
    } else if (ofShapes(main) && !layers.has(stemOf(main.name, besideShapes)) && !ofPicture(main)) {
      const beside = files.filter((other) => other !== main && ofShapes(other) && stemOf(other.name, besideShapes) === stemOf(main.name, besideShapes));
      beside.forEach((other) => taken.add(other));
      groups.push({ kind: beside.length > 0 ? 'shapefile' : 'alone', main, beside });
    } else if (!ofPicture(main) && !ofShapes(main)) groups.push({ kind: 'alone', main, beside: [] });
  }
  return groups;
}

function stemOf(name: string, ending: RegExp): string {
  return name.replace(ending, '').toLowerCase();
}

function stemsOf(files: readonly { readonly name: string }[], ending: RegExp): Set<string> {
  return new Set(files.filter(({ name }) => ending.test(name)).map(({ name }) => stemOf(name, ending)));
}
