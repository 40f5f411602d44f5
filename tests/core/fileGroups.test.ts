import { describe, expect, it } from 'vitest';
import { fileGroups } from '../../shared/importing/fileGroups.ts';

const groups = (...names: string[]) => fileGroups(names.map((name) => ({ name }))).map(({ kind, main, beside }) => [kind, main.name, ...beside.map(({ name }) => name)]);

describe('files that are parts of one', () => {
  it('puts what lies beside a picture to it, whatever the case of its name', () => {
    expect(groups('FIELD.TFW', 'Field.tif', 'field.tif.aux.xml', 'field.tif.msk', 'field.tif.ovr', 'field.prj', 'ec.csv')).toEqual([
      ['picture', 'Field.tif', 'FIELD.TFW', 'field.tif.aux.xml', 'field.tif.msk', 'field.tif.ovr', 'field.prj'],
      ['alone', 'ec.csv'],
    ]);
  });

  it('puts the parts of each shapefile together', () => {
    expect(groups('a.dbf', 'a.shp', 'b.shp', 'A.SHX', 'b.shx', 'b.shp.xml', 'a.cpg')).toEqual([['shapefile', 'a.shp', 'a.dbf', 'A.SHX', 'a.cpg'], ['shapefile', 'b.shp', 'b.shx', 'b.shp.xml']]);
  });

  it('gives a .prj to the picture and to the shapefile of its name', () => {
    expect(groups('a.tif', 'a.shp', 'a.prj', 'a.dbf')).toEqual([['picture', 'a.tif', 'a.prj'], ['shapefile', 'a.shp', 'a.prj', 'a.dbf']]);
  });

  it('keeps parts without their shapes together, and everything else alone', () => {
    expect(groups('a.dbf', 'a.shx', 'b.dbf', 'c.prj', 'd.tfw', 'e.tif', 'f.shp')).toEqual([['shapefile', 'a.dbf', 'a.shx'], ['alone', 'b.dbf'], ['alone', 'c.prj'], ['alone', 'd.tfw'], ['picture', 'e.tif'], ['shapefile', 'f.shp']]);
  });
});
