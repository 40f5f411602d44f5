import type { BandUnderstood, ImportQuestion, ImportWarning } from '../understood.ts';
import type { RasterPreview } from './previewRaster.ts';

/** Values with which programs fill a mask that the file does not declare as one. */
const tops = [1, 255, 65535];

/**
 * The last of several bands that holds nothing but 0 and one top value is probably a mask whose meaning the file leaves
 * out. With gaps in it a person must say so; without, it is only named, since it takes nothing away. Null for any other.
 */
export function findMaskBand(preview: RasterPreview, bands: readonly BandUnderstood[], isAnswered: boolean): { index: number; question: ImportQuestion | null; warning: ImportWarning | null } | null {
  const last = preview.bands.at(-1);
  const band = bands.at(-1);
  if (preview.bands.length < 2 || last === undefined || band === undefined || last.index !== band.index || !/^unsigned|^float/.test(band.type)) return null;
  const present = last.raw.filter((value) => !Number.isNaN(value));
  const top = present.find((value) => value !== 0);
  if (top === undefined || !tops.includes(top) || present.some((value) => value !== 0 && value !== top)) return null;
  const missing = present.reduce((count, value) => count + (value === 0 ? 1 : 0), 0) / present.length;
  const { index } = band;
  if (missing === 0) return { index, question: null, warning: { code: 'mask-full', text: `Band ${index} holds nothing but ${top}, as a mask without gaps does; it is no measurement.`, params: { band: index, value: top } } };
  const text = `Band ${index} holds only 0 and ${top}, as a mask does, but is not declared as one; it is 0 on ${percent(missing)} % of the pixels.`;
  if (isAnswered) return { index, question: null, warning: null };
  return {
    index,
    warning: null,
    question: {
      code: 'mask-band',
      text: `${text} Does 0 in it mean that nothing was measured there?`,
      why: { code: 'mask-like', text, params: { band: index, value: top, percent: percent(missing) } },
      choices: [
        { value: 'mask', label: 'Yes, it is a mask' },
        { value: 'values', label: 'No, it holds values' },
      ],
    },
  };
}

const percent = (share: number) => Number((share * 100).toPrecision(2));
