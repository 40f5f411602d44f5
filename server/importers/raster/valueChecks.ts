import type { BandUnderstood, ImportQuestion, ImportWarning } from '../understood.ts';

export interface ValueFindings {
  questions: readonly ImportQuestion[];
  warnings: readonly ImportWarning[];
}

interface Context {
  noDataAnswered: boolean;
  bands: number;
}

/** Numbers that programs write for "missing"; whole-number types also use their ends and 0. */
const customary = [-9999, -99999, -10000, -32768, -32767, -999, -3.4028234663852886e38, 65535];

/** Looks at a preview of one band: a likely unmarked void, a constant picture, values at the end of their range. */
export function checkValues({ index, raw, values }: { index: number; raw: Float64Array; values: Float32Array }, band: BandUnderstood, { noDataAnswered, bands }: Context): ValueFindings {
  const questions: ImportQuestion[] = [];
  const warnings: ImportWarning[] = [];
  const name = bands === 1 ? 'It' : `Band ${index}`;
  const present = values.filter((value) => !Number.isNaN(value)).sort();
  if (present.length === 0) return { questions, warnings: [{ code: 'band-empty', text: `${name} has no values.`, params: { band: index } }] };
  const lowest = present[0]!;
  const highest = present[present.length - 1]!;
  if (lowest === highest) warnings.push({ code: 'constant', text: `${name} has the same value everywhere (${tidy(lowest)}); it cannot show differences.`, params: { band: index, value: tidy(lowest) } });
  else if (!noDataAnswered) {
    const suspect = suspectVoid(raw, band);
    if (suspect !== null) questions.push(voidQuestion(suspect));
  }
  const full = saturation(raw, band);
  if (full !== null && lowest !== highest)
    warnings.push({
      code: 'saturated',
      text: `${name} has ${percent(full.share)} of its pixels at ${full.value}, the largest value its type can hold; differences there are lost.`,
      params: { band: index, share: full.share },
    });
  return { questions, warnings };
}

/** A tenth and more of the values beyond anything measured, and as many too small to be anything (judgement). */
export function isScrambled(raw: Float64Array): boolean {
  let [huge, tiny, present] = [0, 0, 0];
  for (const value of raw) {
    if (!Number.isNaN(value)) present += 1;
    if (Math.abs(value) > 1e12) huge += 1;
    else if (value !== 0 && Math.abs(value) < 1e-12) tiny += 1;
  }
  return huge > present / 10 && tiny > present / 10;
}

/** Suspected "missing" value and its share, when the band has none declared. */
function suspectVoid(raw: Float64Array, band: BandUnderstood): { value: number; share: number } | null {
  if (band.noData !== null) return null;
  const sorted = raw.filter((value) => !Number.isNaN(value)).sort();
  if (sorted.length === 0) return null;
  const shareOf = (value: number): number => sorted.reduce((count, each) => count + (each === value ? 1 : 0), 0) / sorted.length;
  for (const end of [sorted[0]!, sorted[sorted.length - 1]!]) {
    const share = shareOf(end);
    if (share === 1) continue;
    const named = customary.some((value) => value === end || Math.fround(value) === end);
    if (named) return { value: end, share };
    if (share > 0.01 && ((end === 0 && standsApart(sorted)) || liesFar(sorted, end) || (band.type.startsWith('float') && recurs(sorted, end)))) return { value: end, share };
  }
  return null;
}

/** Zeros are voids when the next value is far away: further than a quarter of the spread of the rest. */
function standsApart(sorted: Float64Array): boolean {
  const rest = sorted.filter((value) => value !== 0);
  const spread = rest[Math.floor(rest.length * 0.95)]! - rest[Math.floor(rest.length * 0.05)]!;
  return rest[0]! > 0 && rest[0]! > spread / 4;
}

/** An end value farther from the next one than nine tenths of the rest spread. */
function liesFar(sorted: Float64Array, end: number): boolean {
  const rest = sorted.filter((value) => value !== end);
  const spread = rest[Math.floor(rest.length * 0.95)]! - rest[Math.floor(rest.length * 0.05)]!;
  const nearest = end === sorted[0] ? rest[0]! : rest[rest.length - 1]!;
  return spread > 0 && Math.abs(nearest - end) > spread;
}

/** A round end value that comes again and again among decimals of which hardly two are alike: nothing measured is so even. */
function recurs(sorted: Float64Array, end: number): boolean {
  if (!Number.isInteger(end)) return false;
  const rest = sorted.filter((value) => value !== end);
  let repeated = 0;
  for (let at = 1; at < rest.length; at++) if (rest[at] === rest[at - 1]) repeated++;
  return rest.length > 100 && repeated < 0.05 * rest.length;
}

function voidQuestion({ value, share }: { value: number; share: number }): ImportQuestion {
  const shown = tidy(value);
  return {
    code: 'no-data',
    text: `${percent(share)} of its pixels have the value ${shown}, and the file has no mark for missing values. Does ${shown} mean that nothing was measured there?`,
    why: { code: 'value-returns', text: `${percent(share)} of its pixels have the value ${shown}, and the file has no mark for missing values.`, params: { percent: Number((share * 100).toPrecision(2)), value: shown } },
    choices: [
      { value: String(value), label: `Yes, ${shown} means missing` },
      { value: 'none', label: `No, ${shown} is a measured value` },
    ],
  };
}

/** Share at the top of a whole-number type, when it is more than a thousandth. */
function saturation(raw: Float64Array, band: BandUnderstood): { value: number; share: number } | null {
  const top = ({ 'unsigned 8-bit': 255, 'unsigned 16-bit': 65535 } as Readonly<Record<string, number>>)[band.type];
  if (top === undefined || band.noData === top) return null;
  const share = raw.reduce((count, value) => count + (value === top ? 1 : 0), 0) / raw.length;
  return share > 0.001 ? { value: top, share } : null;
}

function percent(share: number): string {
  return `${share >= 0.1 ? Math.round(share * 100) : Number((share * 100).toPrecision(2))} %`;
}

function tidy(value: number): number {
  return Number(value.toPrecision(7));
}
