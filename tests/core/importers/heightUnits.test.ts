import { describe, expect, it } from 'vitest';
import { describeRaster } from '../../../server/importers/raster/describeRaster.ts';
import { writeTiff } from './writeTiff.ts';

const metres = [1024, 0, 1, 1, 1025, 0, 1, 1, 3072, 0, 1, 32631];
const unitOf = async (keys: number[], xml?: string) => (await describeRaster(writeTiff({ width: 4, height: 4, type: 'f32', geo: { keys: [...metres, ...keys] }, ...(xml === undefined ? {} : { tags: { 42112: xml } }) }), { fileName: 'dem.tif' })).verticalUnit;

describe('the unit of heights', () => {
  it('is the one of the key for it', async () => {
    expect([await unitOf([4099, 0, 1, 9001]), await unitOf([4099, 0, 1, 9002]), await unitOf([4099, 0, 1, 9003])]).toEqual(['metre', 'foot', 'US survey foot']);
  });

  it('is that of the height system, which is all that GDAL writes of NAVD 88 in feet', async () => {
    expect([await unitOf([4096, 0, 1, 6360]), await unitOf([4096, 0, 1, 8228]), await unitOf([4096, 0, 1, 5703]), await unitOf([4096, 0, 1, 4711])]).toEqual(['US survey foot', 'foot', 'metre', null]);
  });

  it('is that of the band before all others', async () => {
    const unit = (text: string) => unitOf([4096, 0, 1, 5703], `<GDALMetadata><Item name="UNITTYPE" sample="0" role="unittype">${text}</Item></GDALMetadata>`);
    expect([await unit('ft'), await unit('US survey foot'), await unit('m'), await unit('furlong')]).toEqual(['foot', 'US survey foot', 'metre', 'metre']);
  });

  it('is not known where nothing says it', async () => expect(await unitOf([])).toBeNull());
});
