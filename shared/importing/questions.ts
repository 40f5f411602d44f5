import { sourceUnits } from '../catalog/sourceUnits.ts';
import { INDICES, type BandName, type IndexId, type VegetationIndex } from '../analysis/indices.ts';
import { growthStages, type FieldSummary, type ImportAnswers, type ImportPurpose, type ImportQuestion, type ImportQuestionCode, type QuestionChoice, type UnderstoodFile } from '../contracts/imports.ts';
import { dateInName, suggestBand, suggestIndex, suggestNameField, suggestPurpose, suggestRowField, suggestValueField, unitInName } from './suggestions.ts';

/**
 * What must be asked of a person about a file, as a table: one row a question, in the order of asking. Later questions
 * depend on earlier answers. A suggestion is shown beforehand and counts for nothing until somebody answers.
 */

export interface Asking {
  readonly file: UnderstoodFile;
  readonly fileName: string;
  readonly answers: ImportAnswers;
}

interface Row {
  readonly code: ImportQuestionCode;
  readonly kind?: ImportQuestion['kind'];
  readonly applies: (asking: Asking) => boolean;
  readonly choices?: (asking: Asking) => readonly (QuestionChoice['value'] | QuestionChoice)[];
  readonly suggestion?: (asking: Asking) => QuestionChoice['value'];
}

const measured: readonly ImportPurpose[] = ['vigour', 'conductivity', 'yield'];
const indexIds = ['ndvi', 'gndvi', 'ndre', 'ratio', 'savi', 'osavi', 'msavi2'] as const satisfies readonly IndexId[];
const isFor = (asking: Asking, ...purposes: ImportPurpose[]) => asking.answers.purpose !== undefined && purposes.includes(asking.answers.purpose);

const table: readonly Row[] = [
  { code: 'purpose', applies: () => true, choices: purposesOf, suggestion: ({ file, fileName }) => suggestPurpose(file, fileName) },
  { code: 'value', applies: (asking) => isFor(asking, 'vigour') && bandCount(asking) > 1, choices: () => [...indexIds, 'band'], suggestion: ({ file }) => (suggestBand(file, 'nir') !== null && suggestBand(file, 'red') !== null ? 'ndvi' : null) },
  bandRow('nirBand', 'nir'),
  bandRow('redBand', 'red'),
  bandRow('greenBand', 'green'),
  bandRow('redEdgeBand', 'redEdge'),
  { code: 'band', applies: (asking) => bandCount(asking) > 1 && (asking.answers.value === 'band' || (asking.answers.purpose !== undefined && !isFor(asking, 'vigour', 'boundary'))), choices: bandChoices },
  { code: 'attribute', applies: (asking) => asking.file.kind !== 'raster' && asking.answers.purpose !== undefined && !isFor(asking, 'boundary', 'rows'), choices: valueFields, suggestion: (asking) => suggestValueField(valueFieldList(asking), asking.answers.purpose) },
  { code: 'holds', applies: (asking) => isFor(asking, 'vigour') && indexOf(asking) === null && (bandCount(asking) <= 1 || asking.answers.value === 'band'), choices: () => [...indexIds, 'other'], suggestion: ({ fileName }) => suggestIndex(fileName) },
  { code: 'soilAs', applies: (asking) => isFor(asking, 'soil') && (asking.file.kind === 'raster' || attributeOf(asking)?.kind === 'number'), choices: () => ['number', 'classes'] },
  { code: 'unit', applies: (asking) => sourceUnits[asking.answers.purpose ?? 'boundary'] !== undefined, choices: ({ answers }) => sourceUnits[answers.purpose ?? 'boundary']!.map((row) => row.unit), suggestion: suggestUnit },
  { code: 'capturedOn', kind: 'date', applies: (asking) => isFor(asking, ...measured), choices: () => [null], suggestion: ({ file, fileName }) => (file.kind === 'raster' ? file.captured : null) ?? dateInName(fileName) },
  { code: 'alleys', applies: (asking) => isFor(asking, 'vigour') && asking.file.kind === 'raster', choices: () => ['bare', 'mown', 'green', 'unknown'] },
  { code: 'growthStage', applies: (asking) => isFor(asking, 'vigour') && asking.file.kind === 'raster', choices: () => growthStages },
  { code: 'canopy', applies: (asking) => isFor(asking, 'vigour') && tellsCanopy(asking), choices: () => ['all', 'threshold', 'rows'] },
  { code: 'steelTrellis', applies: (asking) => isFor(asking, 'conductivity'), choices: () => ['yes', 'no', 'unknown'] },
  { code: 'nameField', applies: (asking) => isFor(asking, 'boundary') && fieldsOf(asking).length > 0, choices: (asking) => [...fieldsOf(asking).map((each) => labelled(each.name, each.name)), null], suggestion: (asking) => suggestNameField(fieldsOf(asking)) },
  { code: 'rowLabelField', applies: (asking) => isFor(asking, 'rows') && fieldsOf(asking).length > 0, choices: (asking) => [...fieldsOf(asking).map((each) => labelled(each.name, each.name)), null], suggestion: (asking) => suggestRowField(fieldsOf(asking)) },
];

/** Pixels up to this size can lie on a vine row alone: a quarter of common row spacings (judgement). */
const finePixelM = 0.6;

/** Fine pixels of a known index, which is high where the canopy is. */
function tellsCanopy(asking: Asking): boolean {
  const { file, answers } = asking;
  if (file.kind !== 'raster' || file.pixelSizeM === null || file.pixelSizeM > finePixelM) return false;
  return indexOf(asking) !== null || (answers.holds !== undefined && answers.holds !== 'other');
}

/** All questions about a file that follow from the answers so far, answered ones too. */
export function importQuestions(asking: Asking): ImportQuestion[] {
  return table.filter((row) => row.applies(asking)).map((row) => {
    const answer = asking.answers[row.code];
    const choices = (row.choices?.(asking) ?? []).map((choice) => (typeof choice === 'object' && choice !== null ? choice : bare(choice)));
    return { code: row.code, kind: row.kind ?? 'choice', reason: null, choices, suggestion: row.suggestion?.(asking) ?? null, answer: answer === undefined ? null : (answer as QuestionChoice['value']), answered: isAnswered(row, answer, choices) };
  });
}

/** An answer counts when it is among the choices; a day may be any day. */
function isAnswered(row: Row, answer: unknown, choices: readonly QuestionChoice[]): boolean {
  if (answer === undefined) return false;
  return row.kind === 'date' || choices.some((choice) => choice.value === answer);
}

function bandRow(code: 'nirBand' | 'redBand' | 'greenBand' | 'redEdgeBand', band: BandName): Row {
  return {
    code,
    applies: (asking) => {
      const index = indexOf(asking);
      return isFor(asking, 'vigour') && index !== null && (INDICES[index] as VegetationIndex).bands.includes(band);
    },
    choices: bandChoices,
    suggestion: ({ file }) => suggestBand(file, band),
  };
}

/** The index to be made of bands, or null when a band is taken as it is. */
export function indexOf({ file, answers }: Pick<Asking, 'file' | 'answers'>): IndexId | null {
  if (file.kind !== 'raster' || file.bands.length < 2 || answers.value === undefined || answers.value === 'band') return null;
  return answers.value;
}

function purposesOf({ file, answers }: Asking): ImportPurpose[] {
  if (file.kind === 'raster') return ['vigour', 'elevation', 'soil', 'conductivity', 'yield'];
  if (file.kind === 'points') return ['conductivity', 'yield', 'soil', 'elevation', 'vigour'];
  const layer = layerOf(file, answers);
  const kinds = new Set(layer?.geometryKinds.map((kind) => kind.replace('Multi', '')));
  const hasValues = (layer?.fields ?? []).some((field) => field.kind === 'number' || field.kind === 'text');
  if (kinds.has('Polygon')) return hasValues ? ['boundary', 'soil', 'conductivity', 'yield', 'vigour'] : ['boundary'];
  return kinds.has('LineString') ? ['rows', 'boundary'] : ['conductivity', 'yield', 'soil', 'elevation', 'vigour'];
}

function layerOf(file: UnderstoodFile, answers: ImportAnswers) {
  if (file.kind !== 'vector') return undefined;
  return file.layers.find((layer) => layer.name === answers.sourceLayer) ?? file.layers[0];
}

/** Fields or columns that can hold a value. */
function fieldsOf({ file, answers }: Pick<Asking, 'file' | 'answers'>): readonly FieldSummary[] {
  if (file.kind === 'points') return file.columns.filter((column) => column.name !== file.position?.first && column.name !== file.position?.second);
  return layerOf(file, answers)?.fields ?? [];
}

function attributeOf(asking: Asking): FieldSummary | undefined {
  return fieldsOf(asking).find((field) => field.name === asking.answers.attribute);
}

function valueFieldList(asking: Asking): readonly FieldSummary[] {
  // Only soil has classes, and only shapes can carry them: a class between two points is nobody's.
  const classesToo = isFor(asking, 'soil') && purposesOf(asking).includes('boundary');
  return fieldsOf(asking).filter((field) => field.kind === 'number' || (classesToo && field.kind === 'text'));
}

function valueFields(asking: Asking): QuestionChoice[] {
  return valueFieldList(asking).map((field) => labelled(field.name, field.examples.length === 0 ? field.name : `${field.name} (${field.examples.slice(0, 3).join(', ')})`));
}

function bandCount({ file }: Asking): number {
  return file.kind === 'raster' ? file.bands.length : 0;
}

function bandChoices({ file }: Asking): QuestionChoice[] {
  return file.kind === 'raster' ? file.bands.map((band) => labelled(band.index, band.description ?? (band.colour === null || band.colour === 'grey' ? '' : `colour:${band.colour}`))) : [];
}

function suggestUnit({ file, answers }: Asking): string | null {
  if (answers.purpose === 'elevation' && file.kind === 'raster') {
    return { metre: 'm', foot: 'ft', 'US survey foot': 'ftUS' }[file.verticalUnit ?? ''] ?? null;
  }
  return unitInName(answers.attribute ?? '', (sourceUnits[answers.purpose ?? 'boundary'] ?? []).map((row) => row.unit));
}

function labelled(value: QuestionChoice['value'], label: string): QuestionChoice {
  return { ...bare(value), label };
}

function bare(value: QuestionChoice['value']): QuestionChoice {
  return { value, label: null, outlineLonLat: null, distanceKm: null };
}
