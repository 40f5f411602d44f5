import { randomUUID } from 'node:crypto';
import { writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { ImportAnswers } from '../../shared/contracts/imports.ts';
import type { Access } from '../access/access.ts';
import { Job } from '../models/Job.ts';
import { answerImport } from '../services/imports/answer.ts';
import { placeLayerJob } from '../services/imports/placeLayer.ts';
import { receiveFiles } from '../services/imports/receive.ts';
import { fileStore } from '../storage/fileStore.ts';
import type { DemoDays } from './demoDays.ts';
import type { Ground } from './ground.ts';
import { conductivityPoints, elevationModel, soilMap, vigourImage, type DemoFile } from './layerFiles.ts';
import type { DemoEstate } from './seedEstate.ts';

/** The layers of the demo, through the same door as anybody's files: received, asked, answered and placed. */
export async function seedLayers(made: DemoEstate, ground: Ground, days: DemoDays): Promise<void> {
  const access: Access = { estateId: made.estateId, personId: made.personOf('agronomist'), roles: ['agronomist'] };
  const vigour = (capturedOn: string, layerName: string): ImportAnswers => ({ purpose: 'vigour', value: 'ndvi', redBand: 1, nirBand: 2, capturedOn, alleys: 'mown', growthStage: 'veraison', canopy: 'all', layerName });
  const taken = days.day(-40);
  const before = days.day(-404);
  await importOne(access, vigourImage(ground, { seed: 41, year: Number(before.slice(0, 4)), gain: 0.93 }), vigour(before, `Vigour ${before.slice(0, 4)}`));
  await importOne(access, vigourImage(ground, { seed: 42, year: Number(taken.slice(0, 4)), gain: 1 }), vigour(taken, `Vigour ${taken.slice(0, 4)}`));
  await importOne(access, conductivityPoints(ground, 43), { purpose: 'conductivity', attribute: 'ec_deep_mS_m', unit: 'mS/m', capturedOn: days.day(-230), steelTrellis: 'no', layerName: 'Soil conductivity' });
  await importOne(access, elevationModel(ground), { purpose: 'elevation', value: 'band', band: 1, unit: 'm', capturedOn: days.day(-1400), layerName: 'Elevation' });
  await importOne(access, soilMap(ground), { purpose: 'soil', attribute: 'SOIL', soilAs: 'classes', capturedOn: null, layerName: 'Soil survey' });
}

async function importOne(access: Access, file: DemoFile, answers: ImportAnswers): Promise<void> {
  const path = join(fileStore().incomingFolder, randomUUID());
  await writeFile(path, file.bytes);
  const [received] = await receiveFiles(access, [{ path, name: file.name, bytes: file.bytes.length }]);
  const wanted = new Set<string>();
  let view = received!;
  // Questions come in steps: what a file is for decides what else must be known.
  while (view.state === 'asks') {
    const open = view.questions.filter((question) => !question.answered);
    const next = Object.fromEntries(open.map((question) => [question.code, answers[question.code as keyof ImportAnswers]]).filter(([, value]) => value !== undefined));
    const key = JSON.stringify(next);
    if (wanted.has(key) || Object.keys(next).length === 0) throw new Error(`${file.name} still asks: ${open.map((question) => question.code).join(', ')}`);
    wanted.add(key);
    view = await answerImport(access, view.id, answersSoFar(answers, next));
  }
  const job = await Job.query().where({ estateId: access.estateId, subjectType: 'import', subjectId: view.id, kind: 'placeLayer' }).first().throwIfNotFound();
  const result = await placeLayerJob.work({ job, report: () => Promise.resolve() });
  await job.$query().patch({ state: 'done', stage: 'done', progress: 1, result: result ?? null, finishedAt: new Date() });
}

/** The answers asked for now, with the name that the layer is to have. */
function answersSoFar(answers: ImportAnswers, next: Record<string, unknown>): ImportAnswers {
  return { ...(next as ImportAnswers), ...(answers.layerName ? { layerName: answers.layerName } : {}) };
}
