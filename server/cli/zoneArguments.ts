import { parseArgs } from 'node:util';
import { INDICES, type BandName, type IndexId } from '../../shared/analysis/indices.ts';
import type { ImportPurpose } from '../../shared/contracts/imports.ts';
import { helpText, MORE } from './zoneHelp.ts';

/**
 * The command line of zoning, checked and typed before any file is touched.
 * A layer is TYPE=PATH with options after #, as in ndvi=bands.tif#red=1,nir=2.
 */

/** Input that a person can correct: shown as one line, exit code 2. */
export class BadInput extends Error {}

export interface LayerArgument {
  /** Name in the report; unique. */
  readonly id: string;
  readonly type: string;
  readonly purpose: Exclude<ImportPurpose, 'boundary'>;
  /** Index to compute from bands when bands are named. */
  readonly index: IndexId | null;
  /** Terrain figure to derive from elevation. */
  readonly terrain: 'slope' | 'northness' | 'eastness' | null;
  readonly path: string;
  readonly bands: Partial<Record<BandName, number>>;
  readonly options: Readonly<Record<string, string>>;
}

export interface ZoneArguments {
  readonly blockPath: string;
  readonly layers: readonly LayerArgument[];
  readonly readingsPath: string | null;
  readonly zones: 'advise' | number;
  readonly layerWeights: 'advise' | 'equal';
  readonly cellSizeM: number;
  /** Null takes what suits the block. */
  readonly smallestPatchHa: number | null;
  readonly smoothingM: number;
  readonly standardise: 'plain' | 'robust';
  readonly principalComponents: boolean;
  readonly seed: number;
  readonly outPath: string;
  readonly reportPath: string | null;
}

const layerKinds: Record<string, Pick<LayerArgument, 'type' | 'purpose' | 'terrain'>> = {
  vigour: { type: 'vigour', purpose: 'vigour', terrain: null },
  conductivity: { type: 'conductivity', purpose: 'conductivity', terrain: null },
  yield: { type: 'yield', purpose: 'yield', terrain: null },
  soil: { type: 'soilNumber', purpose: 'soil', terrain: null },
  elevation: { type: 'elevation', purpose: 'elevation', terrain: null },
  slope: { type: 'slope', purpose: 'elevation', terrain: 'slope' },
  northness: { type: 'northness', purpose: 'elevation', terrain: 'northness' },
  eastness: { type: 'eastness', purpose: 'elevation', terrain: 'eastness' },
};

const bandNames: Record<string, BandName> = { nir: 'nir', red: 'red', green: 'green', rededge: 'redEdge' };
const layerOptions = new Set(['band', 'field', 'value', 'as', 'unit', 'lat', 'lon', 'epsg', 'nodata', 'layer', 'weight', 'surface', ...Object.keys(bandNames)]);

const argumentOptions = {
  block: { type: 'string' },
  layer: { type: 'string', multiple: true },
  readings: { type: 'string' },
  zones: { type: 'string', default: 'advise' },
  'layer-weights': { type: 'string', default: 'advise' },
  cell: { type: 'string', default: '2' },
  'min-patch-ha': { type: 'string' },
  smooth: { type: 'string', default: '3' },
  standardise: { type: 'string', default: 'plain' },
  components: { type: 'boolean', default: false },
  seed: { type: 'string', default: '1' },
  out: { type: 'string' },
  report: { type: 'string' },
} as const;

/** The text to print instead of zoning, where it is asked for. */
export function helpAskedFor(args: readonly string[]): string | null {
  return args.some((arg) => arg === '--help' || arg === '-h') ? helpText({ layers: Object.keys(layerKinds), indices: Object.keys(INDICES) }) : null;
}

/** Throws BadInput naming the option, its value and what it may be. */
export function readArguments(args: readonly string[]): ZoneArguments {
  const values = parsed(args);
  const layers = (values.layer ?? []).map(readLayer);
  if (values.block === undefined) throw new BadInput(`--block is missing. ${MORE}`);
  if (values.out === undefined) throw new BadInput(`--out is missing. ${MORE}`);
  if (layers.length === 0) throw new BadInput('--layer is missing; give at least one, such as --layer vigour=ndvi.tif.');
  return {
    blockPath: values.block,
    layers: withOwnNames(layers),
    readingsPath: values.readings ?? null,
    zones: values.zones === 'advise' ? 'advise' : wholeNumber('--zones', values.zones, { least: 1, most: 6, or: 'advise or ' }),
    layerWeights: oneOf('--layer-weights', values['layer-weights'], ['advise', 'equal']),
    cellSizeM: numberIn('--cell', values.cell, { least: 0.25, most: 100 }),
    smallestPatchHa: values['min-patch-ha'] === undefined ? null : numberIn('--min-patch-ha', values['min-patch-ha'], { least: 0, most: 100 }),
    smoothingM: numberIn('--smooth', values.smooth, { least: 0, most: 50 }),
    standardise: oneOf('--standardise', values.standardise, ['plain', 'robust']),
    principalComponents: values.components,
    seed: wholeNumber('--seed', values.seed, { least: 0, most: 2 ** 31 - 1, or: '' }),
    outPath: values.out,
    reportPath: values.report ?? null,
  };
}

function parsed(args: readonly string[]) {
  try {
    return parseArgs({ args: [...args], options: argumentOptions, allowPositionals: false }).values;
  } catch (error) {
    if (error instanceof TypeError) throw new BadInput(`${error.message.split('\n')[0]!.replace(/\.?$/, '.')} ${MORE}`, { cause: error });
    throw error;
  }
}

function readLayer(text: string): Omit<LayerArgument, 'id'> & { name: string } {
  const equals = text.indexOf('=');
  if (equals < 1) throw new BadInput(`--layer ${text}: give type and file, as in vigour=ndvi.tif.`);
  const name = text.slice(0, equals);
  const index = name in INDICES ? (name as IndexId) : null;
  const kind = index === null ? layerKinds[name] : layerKinds.vigour;
  if (kind === undefined) {
    throw new BadInput(`--layer ${text}: "${name}" is no layer type; use one of ${[...Object.keys(layerKinds), ...Object.keys(INDICES)].join(', ')}, as in vigour=ndvi.tif.`);
  }
  const [path, optionText] = splitOptions(text.slice(equals + 1));
  if (path === '') throw new BadInput(`--layer ${text}: the file is missing after "=".`);
  const options = readOptions(text, optionText);
  const bands = Object.fromEntries(Object.entries(options).flatMap(([key, value]) => (key in bandNames ? [[bandNames[key]!, wholeNumber(`--layer ${text}: ${key}`, value, { least: 1, most: 1024, or: '' })]] : [])));
  const hasBands = Object.keys(bands).length > 0;
  if (hasBands && kind.purpose !== 'vigour') throw new BadInput(`--layer ${text}: bands make a vegetation index; for ${name} give band=1.`);
  const [first, second] = Object.keys(bands).filter((each) => Object.values(bands).filter((band) => band === bands[each as BandName]).length > 1);
  if (first !== undefined) throw new BadInput(`--layer ${text}: ${first} and ${second} cannot be the same band of the picture.`);
  return { name, ...kind, index: hasBands ? (index ?? 'ndvi') : null, path, bands, options };
}

/** The file may have a # in its name: only what looks like options after the last one counts. */
function splitOptions(text: string): [path: string, options: string] {
  const hash = text.lastIndexOf('#');
  return hash > 0 && /^[a-zA-Z]+=/.test(text.slice(hash + 1)) ? [text.slice(0, hash), text.slice(hash + 1)] : [text, ''];
}

function readOptions(layer: string, text: string): Record<string, string> {
  const options: Record<string, string> = {};
  for (const part of text === '' ? [] : text.split(',')) {
    const [key, ...rest] = part.split('=');
    const name = key!.trim().toLowerCase();
    if (!layerOptions.has(name) || rest.length === 0) throw new BadInput(`--layer ${layer}: "${part}" is no option; use ${[...layerOptions].join(', ')} as name=value.`);
    options[name] = rest.join('=').trim();
  }
  return options;
}

/** Two layers of one type are told apart by a number. */
function withOwnNames(layers: readonly (Omit<LayerArgument, 'id'> & { name: string })[]): LayerArgument[] {
  return layers.map(({ name, ...layer }, at) => {
    const before = layers.slice(0, at).filter((other) => other.name === name).length;
    return { ...layer, id: before === 0 ? name : `${name}-${before + 1}` };
  });
}

function oneOf<Choice extends string>(option: string, value: string, choices: readonly Choice[]): Choice {
  const found = choices.find((choice) => choice === value);
  if (found === undefined) throw new BadInput(`${option} ${value} cannot be used; give ${choices.join(' or ')}.`);
  return found;
}

function numberIn(option: string, value: string, { least, most }: { least: number; most: number }): number {
  const number = Number(value);
  if (value.trim() === '' || !(number >= least && number <= most)) throw new BadInput(`${option} ${value} cannot be used; give a number from ${least} to ${most}.`);
  return number;
}

function wholeNumber(option: string, value: string, { least, most, or }: { least: number; most: number; or: string }): number {
  const number = Number(value);
  if (!/^\d+$/.test(value.trim()) || number < least || number > most) throw new BadInput(`${option} ${value} cannot be used; give ${or}a whole number from ${least} to ${most}.`);
  return number;
}

/** A weight given with the layer, or null. Throws BadInput for anything but a number from 0. */
export function weightOf(layer: LayerArgument): number | null {
  const { weight } = layer.options;
  return weight === undefined ? null : numberIn(`--layer ${layer.id}: weight`, weight, { least: 0, most: 1000 });
}
