import type { LonLat } from '../../../shared/geo/coordinates.ts';
import type { ImportQuestion, QuestionChoice, ReferenceSystem } from '../understood.ts';
import { referenceFromEpsg, toLonLat } from './referenceSystem.ts';

/** Positions drawn for a possible placing: enough to know a field by its shape, few enough for eight placings at once. */
const mostSampled = 200;

type XYPair = readonly [number, number];

/** At most so many of the positions, evenly chosen in their order. */
export function evenly<Value>(positions: readonly Value[], most = mostSampled): Value[] {
  const step = Math.max(1, positions.length / most);
  return Array.from({ length: Math.min(most, positions.length) }, (_, at) => positions[Math.floor(at * step)]!);
}

/**
 * Questions about the place of a file, each answer with positions of the file where it would put them: a box alone looks
 * right with swapped axes or in a neighbouring system. `sample` is in the file's own coordinates and order of axes.
 */
export function withSample(questions: readonly ImportQuestion[], sample: readonly XYPair[], reference: ReferenceSystem | null): ImportQuestion[] {
  return questions.map((question) => ({ ...question, choices: question.choices.map((choice) => ({ ...choice, ...sampleOf(question.code, choice, { sample, reference }) })) }));
}

function sampleOf(code: ImportQuestion['code'], { value }: QuestionChoice, { sample, reference }: { sample: readonly XYPair[]; reference: ReferenceSystem | null }): { sampleLonLat?: LonLat[] } {
  if (code !== 'reference-system' && code !== 'placement' && code !== 'axes') return {};
  const isCode = /^\d+$/.test(value);
  const system = isCode ? referenceFromEpsg(Number(value), 'answer') : reference;
  if (system === null) return {};
  const convert = toLonLat(system);
  return { sampleLonLat: sample.flatMap(([x, y]) => rounded(convert(value === 'swap' ? [y, x] : [x, y]))) };
}

/** To about 0.1 m. */
export function rounded(position: LonLat | null): LonLat[] {
  return position === null ? [] : [[Number(position[0].toFixed(6)), Number(position[1].toFixed(6))]];
}
