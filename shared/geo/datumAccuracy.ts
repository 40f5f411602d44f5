/**
 * How far a position on an old datum may lie aside after the few parameters that we carry it over by, by the first three of
 * them. Metres, rounded up: the largest horizontal difference from any regional transformation of that datum, within its own
 * area, plus that one's published accuracy; at least the accuracy of our own. Worked out from the EPSG Geodetic Parameter
 * Dataset v10.076 (Helmert transformations to WGS 84 and its equals; sea areas and accuracies above 40 m left out).
 */
const upToM: Readonly<Record<string, number>> = {
  // Chile between 36 and 43.5 degrees south, 99 m and 17 more; 82 m north of there.
  '-288,175,-376': 120,
  // Colombia, Venezuela and Ecuador; 5 m in Brazil.
  '-67.35,3.88,-38.22': 35,
  // Former Yugoslavia from Slovenia (10 m) to Montenegro.
  '682,-203,480': 30,
  // Spain, Portugal and the Aegean; the mean of Europe fits most of it to 10 m.
  '-87,-98,-121': 20,
  '23.92,-141.27,-80.9': 20,
  '-117.808,-51.536,137.784': 15,
  '-136,-108,-292': 15,
  '33.4,-146.6,-76.3': 15,
  // Sicily and Sardinia; 4 m on the mainland.
  '-104.1,-49.1,-9.9': 15,
  '59.47,-5.04,187.44': 15,
  '-48,55,52': 12,
  '-134,-48,149': 11,
  '-148,136,90': 10,
};

const usualM = 5;

/** Metres for a proj4 text: 0 without a shift of datum; null where the shift is none of ours, so that nobody here knows. */
export function datumShiftAccuracyM(definition: string): number | null {
  const shift = /\+towgs84=([-\d.,]+)/.exec(definition)?.[1];
  if (shift === undefined) return 0;
  const numbers = shift.split(',').map(Number);
  if (numbers.every((value) => value === 0)) return 0;
  return upToM[numbers.slice(0, 3).join(',')] ?? (isOurs(numbers) ? usualM : null);
}

/** First parameters of the datums that fit everywhere they are used to 5 m. */
const usual = new Set([
  '446.448,-125.157,542.06', '565.4171,50.3319,465.5524', '-106.8686,52.2978,-103.7239', '-168,-60,320', '674.374,15.056,405.346', '598.1,73.7,418.2',
  '577.326,90.129,463.919', '570.8,85.7,462.8', '-199.87,74.79,246.62', '-304.046,-60.576,103.64', '-223.237,110.193,36.649', '52.17,-71.82,-14.9',
  '482.5,-130.6,564.6', '-189.6806,18.3463,-42.7695', '-275.7224,94.7824,340.8944', '426.9,142.6,460.1', '0,0,4.5',
]);

const isOurs = (numbers: readonly number[]) => usual.has(numbers.slice(0, 3).join(','));
