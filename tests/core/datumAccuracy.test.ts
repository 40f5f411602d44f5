import { describe, expect, it } from 'vitest';
import { readFileSync } from 'node:fs';
import { crsDefinition } from '../../shared/geo/crsDefinitions.ts';
import { datumShiftAccuracyM } from '../../shared/geo/datumAccuracy.ts';
import { referenceChoices } from '../../server/importers/reference/candidates.ts';
import { datumUncertaintyM, datumWarning, toLonLat } from '../../server/importers/reference/referenceSystem.ts';
import { datumShift } from '../../server/importers/reference/datums.ts';

describe('how far a layer on an old datum may lie aside', () => {
  it('names every shift of datum among the systems that ship', () => {
    const texts = ['crsFamilies', 'crsEurope', 'crsAmericas', 'crsRestOfWorld'].map((file) => readFileSync(`shared/geo/${file}.ts`, 'utf8')).join('\n');
    const shifts = [...new Set([...texts.matchAll(/\+towgs84=[-\d.,]+/g)].map(([shift]) => shift))];
    expect(shifts.length).toBeGreaterThan(20);
    expect(shifts.filter((shift) => datumShiftAccuracyM(shift) === null)).toEqual([]);
  });

  it.each(['palestine1923', 'd48', 'mgi1901', 'psad56', 'agd66', 'wgs72', 'luref', 'isr93', 'campoinchauspe'])('names the shift of a datum that a file calls %s', (name) => {
    expect(datumShiftAccuracyM(datumShift(name)!)).toBeGreaterThanOrEqual(5);
  });

  // EPSG:6973, PSAD56 to WGS 84 (17), for Chile from 36°S to 43.5°S: accuracy 17 m.
  it('covers what the transformation made for the south of Chile gives', () => {
    const at = (towgs84: string) => toLonLat({ epsg: null, name: '', unitM: 1, from: 'answer', definition: `+proj=utm +zone=18 +south +ellps=intl +towgs84=${towgs84} +units=m +no_defs` })([700_000, 5_700_000])!;
    const [one, other] = [at('-288,175,-376'), at('-352,403,-287')];
    const apartM = Math.hypot((one[0] - other[0]) * 111_320 * Math.cos((one[1] * Math.PI) / 180), (one[1] - other[1]) * 110_950);
    expect(apartM).toBeGreaterThan(70);
    expect(apartM + 17).toBeLessThanOrEqual(crsDefinition(24878)!.datumUncertaintyM);
  });

  it('says so in the note and beside the choice', () => {
    const psad = crsDefinition(24879)!;
    const reference = { epsg: 24879, name: psad.name, definition: psad.proj4, unitM: 1, from: 'file' as const };
    expect(datumWarning(reference)).toMatchObject({ code: 'datum', params: { uncertaintyM: 120 } });
    const [lon, lat] = toLonLat(reference)([340_000, 6_250_000])!;
    const choices = referenceChoices([[340_000, 6_250_000], [340_100, 6_250_100]], [lon, lat]);
    expect(choices.find(({ value }) => value === '24879')?.uncertaintyM).toBe(120);
    // Among places as near as each other today's system stands first.
    expect(choices[0]!.value).toBe('32719');
  });

  it('does not vouch for numbers that a file brings itself', () => {
    const own = { epsg: null, name: 'unnamed', definition: '+proj=utm +zone=37 +a=6378249.145 +rf=293.465 +towgs84=-166,-15,204 +units=m +no_defs', unitM: 1, from: 'file' as const };
    expect(datumUncertaintyM(own)).toBeNull();
    expect(datumWarning(own)?.code).toBe('datum-own');
  });
});
