import type { RasterUnderstood } from '../understood.ts';

/** Height systems by their EPSG code, as the EPSG Geodetic Parameter Dataset v10.076 lists them (read from the database of PROJ). */

type Codes = readonly (number | readonly [from: number, to: number])[];

const inMetres: Codes = [
  3855, 3886, 3900, 4440, 4458, 5193, 5195, 5214, 5237, 5317, 5336, 5597, [5600, 5613], [5615, 5621], 5701, [5703, 5706], [5709, 5753], [5755, 5799],
  5829, 5831, 5843, [5861, 5874], 5941, [6178, 6187], 6357, [6638, 6644], 6647, [6693, 6695], 6916, [7446, 7447], [7651, 7652], [7699, 7700], 7707,
  7832, 7837, 7839, 7841, [7888, 7890], 7962, 7968, 7976, 7979, 8089, [8266, 8267], [8357, 8358], 8378, 8434, 8675, [8690, 8691], 8841, 8881, 8904,
  8911, 9130, 9245, 9255, 9274, 9279, [9287, 9288], 9303, 9335, 9351, [9389, 9390], [9392, 9402], 9451, 9458, 9471, [9650, 9651], 9663, 9666, 9669,
  9672, 9675, 9681, [9721, 9722], 9923, 9927, 20000, [20034, 20036],
];
const inFeet: Codes = [5614, 6130, 6131, 6132, 8050, 8051, 8228, 8897];
const inSurveyFeet: Codes = [5702, [6358, 6360], [8052, 8053]];
/** These count downwards: depths below a level, not heights above it. */
const downwards: Codes = [
  5336, 5612, 5614, 5706, 5715, 5734, 5739, 5789, 5831, [5861, 5867], 5873, [6357, 6359], 7976, 8051, 8053, 8358, 8378, 8897, [9287, 9288], 9672,
];

const has = (codes: Codes, code: number): boolean => codes.some((entry) => (typeof entry === 'number' ? entry === code : code >= entry[0] && code <= entry[1]));

/** Unit of a height system; null for a code that is none. */
export function heightSystemUnit(code: number): RasterUnderstood['verticalUnit'] {
  if (has(inMetres, code)) return 'metre';
  if (has(inFeet, code)) return 'foot';
  return has(inSurveyFeet, code) ? 'US survey foot' : null;
}

/** True for a system of depths, which are the greater the lower the ground. */
export function countsDownwards(code: number): boolean {
  return has(downwards, code);
}
