import { layerTypeIds } from '../../../shared/catalog/layerTypes.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import type { ImportNote, ImportQuestion, ImportView } from '../../../shared/contracts/imports.ts';
import { importQuestions } from '../../../shared/importing/questions.ts';
import type { Access } from '../../access/access.ts';
import { FileImport, type ImportMemory } from '../../models/FileImport.ts';
import { Job } from '../../models/Job.ts';
import { Layer } from '../../models/Layer.ts';
import { Person } from '../../models/Person.ts';
import { StoredFile } from '../../models/StoredFile.ts';
import { blocksUnder, hasBlocks, type Covered } from './whereabouts.ts';

const most = 200;
const waitsForBlock: ImportNote = { code: 'waits-for-block', text: 'There is no block yet that it could lie on. It waits here until there is one.', params: {} };

/** Lines of the import desk, newest first. */
export async function listImports(access: Access): Promise<ImportView[]> {
  const records = await FileImport.query().where({ estateId: access.estateId }).whereNull('retiredAt').orderBy('createdAt', 'desc').orderBy('id').limit(most);
  return viewsOf(access, records);
}

export async function viewImport(access: Access, importId: string): Promise<ImportView> {
  const record = await FileImport.query().findOne({ estateId: access.estateId, id: importId }).whereNull('retiredAt').throwIfNotFound();
  return (await viewsOf(access, [record]))[0]!;
}

/** Views of several imports; what belongs to them is read for all at once. */
export async function viewsOf(access: Access, records: FileImport[]): Promise<ImportView[]> {
  const { estateId } = access;
  const ids = records.map((record) => record.id);
  const present = <Value>(values: (Value | null)[]) => [...new Set(values.filter((value): value is Value => value !== null))];
  const files = await StoredFile.query().where({ estateId }).whereIn('id', present(records.map((record) => record.fileId)));
  const people = await Person.query().findByIds(present(records.map((record) => record.createdBy))).select('id', 'name');
  const layers = groupBy(await Layer.query().where({ estateId }).whereIn('importId', ids).whereNull('retiredAt').select('id', 'importId', 'type', 'name'), (layer) => layer.importId);
  const jobs = new Map((await Job.query().where({ estateId, subjectType: 'import' }).whereIn('subjectId', ids).orderBy('createdAt').select('id', 'subjectId', 'state')).map((job) => [job.subjectId, job]));
  const covers = await coversOf(estateId, records);
  const isBare = records.some(isPictureInHand) && !(await hasBlocks(estateId));
  return records.map((record) => {
    const file = files.find((each) => each.id === record.fileId);
    return {
      id: record.id,
      fileId: record.fileId,
      fileName: record.fileName,
      bytes: file?.bytes ?? null,
      sha256: file?.sha256 ?? null,
      parts: record.understood.companions.parts ?? [],
      format: record.format,
      // A placing that somebody stopped leaves the answers open to change.
      state: record.state === 'ready' && jobs.get(record.id)?.state === 'cancelled' ? 'asks' : record.state,
      understood: record.state === 'done' ? withoutSample(record.understood.file) : record.understood.file,
      questions: record.state === 'refused' && record.fileId === null ? [] : questionsOf(record).map(settledBare),
      notes: isBare && isPictureInHand(record) ? [...record.warnings, waitsForBlock] : record.warnings,
      problem: record.problem,
      covers: covers.get(record.id) ?? [],
      outlines: record.understood.outlines,
      layers: [...(layers.get(record.id) ?? [])].sort((a, b) => layerTypeIds.indexOf(a.type) - layerTypeIds.indexOf(b.type)).map(({ id, type, name }) => ({ id, type, name })),
      jobId: jobs.get(record.id)?.id ?? null,
      uploadedBy: people.find((person) => person.id === record.createdBy)?.name ?? null,
      createdAt: record.createdAt.toISOString(),
    };
  });
}

/** A raster that was neither placed nor refused. */
function isPictureInHand(record: FileImport): boolean {
  return record.state === 'asks' && record.understood.file?.kind === 'raster';
}

/** What the reader asked, then what follows from the file and the answers so far. */
export function questionsOf(record: Pick<FileImport, 'understood' | 'answers' | 'fileName'>): ImportQuestion[] {
  const { file, asked } = record.understood;
  if (asked.some((question) => !question.answered) || file === null) return asked;
  return [...asked, ...importQuestions({ file, fileName: record.fileName, answers: record.answers })];
}

/** Positions are drawn while somebody must judge a placing; a list of two hundred lines should not carry them for ever. */
function settledBare(question: ImportQuestion): ImportQuestion {
  return question.answered ? { ...question, choices: question.choices.map(({ sampleLonLat: _, ...choice }) => choice) } : question;
}

function withoutSample(file: ImportMemory['file']): ImportMemory['file'] {
  if (file === null || file.sampleLonLat === undefined) return file;
  const { sampleLonLat: _, ...rest } = file;
  return rest;
}

async function coversOf(estateId: string, records: readonly FileImport[]): Promise<Map<string, Covered[]>> {
  const open = records.filter((record) => record.understood.file?.outlineLonLat && record.state !== 'refused');
  const found = await Promise.all(open.map(async (record) => [record.id, (await blocksUnder(estateId, record.understood.file!.outlineLonLat!)).covers] as const));
  return new Map(found);
}
