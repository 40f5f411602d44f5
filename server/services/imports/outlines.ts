import { randomUUID } from 'node:crypto';
import type { MultiPolygon } from 'geojson';
import type { OfferedOutline, OutlinesTaken } from '../../../shared/contracts/imports.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Unusable } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { FileImport } from '../../models/FileImport.ts';
import type { SourceFile } from '../../placing/placed.ts';
import { runCompute } from '../../workers/computePool.ts';
import { insertBlock } from '../blocks/change.ts';
import { say } from '../../sentences/say.ts';

/** Outlines of a boundary file, each with what it would be as a block. */
export function readOutlines(source: SourceFile): Promise<OfferedOutline[]> {
  return runCompute<OfferedOutline[]>('outlinesOfFile', source, { lane: 'quick' });
}

/** Makes blocks of chosen outlines, all or none. Returns their ids in the order asked. */
export async function takeOutlines(access: Access, importId: string, taken: OutlinesTaken, now: Date): Promise<{ id: string; name: string; boundary: MultiPolygon | OfferedOutline['boundary'] }[]> {
  return FileImport.transaction(async (trx) => {
    const record = await FileImport.query(trx).findOne({ estateId: access.estateId, id: importId }).whereNull('retiredAt').forUpdate().throwIfNotFound();
    if (record.state === 'done') throw new Clash('importDone', say('importDone', { file: record.fileName }));
    if (record.state !== 'ready' || record.answers.purpose !== 'boundary') throw new Clash('notOutlines', say('notOutlines', { file: record.fileName }));
    const made = [];
    for (const { outline, repaired, ...facts } of taken.blocks) {
      const boundary = boundaryOf(record, { outline, repaired });
      const id = randomUUID();
      await insertBlock(trx, access, { id, input: { ...facts, boundary }, now });
      made.push({ id, name: facts.name, boundary });
    }
    await FileImport.query(trx).where({ estateId: access.estateId, id: importId }).patch({ state: 'done', finishedAt: now });
    await writeAudit(trx, access, { action: 'import.outlines', subjectType: 'import', subjectId: importId, subjectName: record.fileName, after: { blocks: made.map(({ id, name }) => ({ id, name })) } });
    return made;
  });
}

function boundaryOf(record: FileImport, { outline, repaired }: { outline: number; repaired: boolean }): OfferedOutline['boundary'] {
  const offered = record.understood.outlines.find((each) => each.index === outline);
  if (!offered) throw new Unusable('noSuchOutline', say('noSuchOutline', { file: record.fileName, outline }));
  if (!repaired && offered.problem === null) return offered.boundary;
  if (repaired && offered.repair !== null) return offered.repair.boundary;
  throw new Unusable(offered.problem?.code ?? 'noRepair', offered.problem?.text ?? say('noRepair', { outline }), offered.place ? { place: offered.place } : {});
}
