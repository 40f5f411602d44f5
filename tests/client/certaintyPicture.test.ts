import { describe, expect, it } from 'vitest';
import { cellAt, cellCentre, defineGrid } from '../../shared/analysis/grid.ts';
import { joinedBands, NO_MEMBERSHIP, WHOLE_MEMBERSHIP } from '../../shared/analysis/zoneMemberships.ts';
import { fromUtm } from '../../shared/geo/utm.ts';
import { certaintyPicture, faintest } from '../../src/components/zones/certaintyPicture.ts';
import { cellPixels, paleGrey } from '../../src/lib/cellPicture.ts';
import { channels } from '../../src/lib/colours.ts';

const block = { boundary: { coordinates: [[[[3, 45], [3.001, 45], [3.001, 45.001], [3, 45.001], [3, 45]]]] as [number, number][][][] }, cellSizeM: 10 };
const grid = defineGrid(block.boundary.coordinates, block.cellSizeM);
const inside = [...grid.inside.keys()].filter((cell) => grid.inside[cell] === 1);
/** Certain of zone 1, torn, put into zone 2 against its ground, and without a layer. */
const [sure, torn, moved, missing] = inside as [number, number, number, number];
const labels = Uint8Array.from(grid.inside, (one, cell) => (one === 0 ? 0 : cell === moved ? 2 : 1));
const share = new Map([[sure, 1], [torn, 0.5], [moved, 0.9]]);
const first = Uint8Array.from(grid.inside, (one, cell) => (one === 0 || cell === missing ? NO_MEMBERSHIP : Math.round((share.get(cell) ?? 0.8) * WHOLE_MEMBERSHIP)));
const second = first.map((step) => (step === NO_MEMBERSHIP ? step : WHOLE_MEMBERSHIP - step));
const text = (bytes: Uint8Array) => Buffer.from(bytes).toString('base64');
const sent = { changedByHand: false, labels: text(labels), memberships: text(joinedBands([first, second])) };
const own = { 1: '#204060' };
const placeOf = (cell: number) => fromUtm(cellCentre(grid, cell), grid.epsg);

describe('the picture of certainty', () => {
  const picture = certaintyPicture(block, sent, own);
  const pixels = cellPixels(picture.raster);
  const pixel = (cell: number) => [...pixels.slice(4 * cell, 4 * cell + 4)];
  const mixed = (colour: string, strength: number) => [...channels(colour).map((part, at) => Math.round(channels(paleGrey)[at]! + (part - channels(paleGrey)[at]!) * strength)), 255];

  it('has a zone’s colour where it is certain, and goes grey by the confusion index', () => {
    expect(pixel(sure)).toEqual(mixed('#204060', 1));
    expect(pixel(torn)).toEqual(mixed('#204060', faintest));
    expect(pixel(inside[10]!)).toEqual(mixed('#204060', faintest + (1 - faintest) * 0.6));
    expect(pixel(moved)).toEqual(mixed(picture.zones[1]!.colour, faintest));
    expect(pixel(missing)).toEqual(mixed('#204060', 0));
    expect(pixel(grid.inside.indexOf(0))[3]).toBe(0);
  });

  it('is read cell by cell', () => {
    expect(cellAt(grid, cellCentre(grid, torn))).toBe(torn);
    expect(picture.read(placeOf(sure))).toEqual({ zone: 1, share: 1, next: 2, nextShare: 0 });
    expect(picture.read(placeOf(moved))).toEqual({ zone: 2, share: expect.closeTo(0.1, 9) as number, next: 1, nextShare: 0.9 });
    expect(picture.read(placeOf(missing))).toBe('missing');
    expect(picture.read([3.1, 45])).toBe('outside');
  });

  it('has colours that people gave numbers only while the numbers are still those of the run', () => {
    expect(picture.zones[0]!.colour).toBe('#204060');
    expect(certaintyPicture(block, { ...sent, changedByHand: true }, own).zones[0]!.colour).not.toBe('#204060');
  });
});
