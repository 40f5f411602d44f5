import { candidateCodes, crsDefinition } from '../../../shared/geo/crsDefinitions.ts';
import type { LonLat, RingLonLat } from '../../../shared/geo/coordinates.ts';
import type { ImportQuestion, QuestionChoice, QuestionReason } from '../understood.ts';
import { distanceKm } from './distance.ts';
import { referenceFromEpsg, toLonLat } from './referenceSystem.ts';

/** Most answers shown at once, and how far from the estate a sensible one may lie. */
const SHOWN = 8;
const FARTHEST_KM = 400;
/** Two systems that place the file this close together are one answer; the more usual one comes first in the list of codes. */
const SAME_PLACE_KM = 0.02;
/** Systems on old datums place a file a few hundred metres aside; among near answers the usual one is shown first. */
const TIE_KM = 1;

type XYPair = readonly [number, number];

/**
 * The question which reference system a file has: candidates by distance from the estate, each with the outline it
 * would give. `outline` is in the file's own coordinates. Nothing is chosen here: the file alone cannot tell.
 */
export function referenceQuestion(outline: readonly XYPair[], estateLonLat: LonLat | null, why: QuestionReason): ImportQuestion {
  const choices = referenceChoices(outline, estateLonLat);
  return { code: 'reference-system', text: `${why.text} Which reference system are its coordinates in?`, why, choices };
}

/** Systems that the coordinates may be in, nearest to the estate first. */
export function referenceChoices(outline: readonly XYPair[], estateLonLat: LonLat | null): QuestionChoice[] {
  return estateLonLat === null ? plausible(outline) : nearest(outline, estateLonLat);
}

/** Why it must be asked: a system is named that cannot be used. `reason` is a clause that follows "because". */
export function unusableReason(names: string, { name, reason }: { name: string; reason: string }): QuestionReason {
  return { code: 'unusable', text: `${names} names "${name}", which cannot be used because ${reason}.`, params: { name, reason } };
}

function nearest(outline: readonly XYPair[], estate: LonLat): QuestionChoice[] {
  const found: { value: string; label: string; outlineLonLat: RingLonLat; distanceKm: number; uncertaintyM: number; centre: LonLat }[] = [];
  const degrees = looksLikeDegrees(outline);
  for (const epsg of new Set(candidateCodes(estate))) {
    // Numbers the size of degrees would lie at the origin of a national grid, which may be near by chance.
    const place = degrees === (epsg === 4326) ? placeWith(outline, epsg) : null;
    if (place === null) continue;
    const away = distanceKm(place.centre, estate);
    if (away > FARTHEST_KM || found.some((other) => distanceKm(other.centre, place.centre) < SAME_PLACE_KM)) continue;
    found.push({ value: String(epsg), label: `${place.name} (EPSG:${epsg})`, outlineLonLat: place.outline, distanceKm: away, uncertaintyM: crsDefinition(epsg)?.datumUncertaintyM ?? 0, centre: place.centre });
  }
  const leastKm = Math.min(...found.map((each) => each.distanceKm));
  const rank = ({ distanceKm: km }: { distanceKm: number }) => Math.floor((km - leastKm) / TIE_KM);
  return found.sort((a, b) => rank(a) - rank(b)).slice(0, SHOWN).map(({ value, label, outlineLonLat, distanceKm: km, uncertaintyM }) => ({ value, label, outlineLonLat, distanceKm: Math.round(km * 10) / 10, uncertaintyM }));
}

/** Without a place to compare with, only degrees can be recognised, by their size. */
function plausible(outline: readonly XYPair[]): QuestionChoice[] {
  return [4326, 3857].flatMap((epsg) => {
    const place = placeWith(outline, epsg);
    return place === null || (epsg === 4326) !== looksLikeDegrees(outline) ? [] : [{ value: String(epsg), label: `${place.name} (EPSG:${epsg})`, outlineLonLat: place.outline, distanceKm: null }];
  });
}

/** All numbers are small enough to be longitude and latitude. */
export function looksLikeDegrees(outline: readonly XYPair[]): boolean {
  return outline.every(([x, y]) => Math.abs(x) <= 180 && Math.abs(y) <= 90);
}

function placeWith(outline: readonly XYPair[], epsg: number): { name: string; outline: RingLonLat; centre: LonLat } | null {
  const reference = referenceFromEpsg(epsg, 'answer');
  if (reference === null) return null;
  const convert = toLonLat(reference);
  const ring: LonLat[] = [];
  for (const position of outline) {
    const lonLat = convert(position);
    if (lonLat === null || Math.abs(lonLat[0]) > 180) return null;
    ring.push(lonLat);
  }
  const middle = (axis: 0 | 1): number => (Math.min(...ring.map((p) => p[axis])) + Math.max(...ring.map((p) => p[axis]))) / 2;
  return { name: reference.name, outline: ring, centre: [middle(0), middle(1)] };
}
