import type { MeasureChange, MeasureView, NewMeasure } from '../../shared/contracts/measures.ts';
import type { Access } from '../access/access.ts';
import { Clash } from '../errors.ts';
import { writeAudit } from '../models/AuditEntry.ts';
import { MeasureRecord } from '../models/MeasureRecord.ts';
import { say } from '../sentences/say.ts';

export async function listMeasures(access: Access): Promise<MeasureView[]> {
  const rows = await MeasureRecord.query().where({ estateId: access.estateId }).orderBy('code');
  return rows.map(viewOf);
}

/** Adds a measure of the estate's own; its code is made from its name and never changes. */
export async function addMeasure(access: Access, input: NewMeasure): Promise<MeasureView> {
  return MeasureRecord.transaction(async (trx) => {
    const code = codeFrom(input.name);
    if (await MeasureRecord.query(trx).findOne({ estateId: access.estateId, code })) throw new Clash('taken', say('measureNameTaken', { name: input.name }));
    const row = await MeasureRecord.query(trx).insertAndFetch({ ...input, code, estateId: access.estateId });
    await writeAudit(trx, access, { action: 'measures.add', subjectType: 'measure', subjectId: row.id, subjectName: input.name, after: input });
    return viewOf(row);
  });
}

export async function changeMeasure(access: Access, measureId: string, change: MeasureChange): Promise<MeasureView> {
  return MeasureRecord.transaction(async (trx) => {
    const before = await MeasureRecord.query(trx).findOne({ estateId: access.estateId, id: measureId }).forUpdate().throwIfNotFound();
    const viewBefore = viewOf(before);
    const after = await before.$query(trx).patchAndFetch(change);
    const changed = Object.keys(change) as (keyof MeasureChange)[];
    await writeAudit(trx, access, { action: 'measures.change', subjectType: 'measure', subjectId: measureId, subjectName: viewBefore.name || viewBefore.code, before: Object.fromEntries(changed.map((key) => [key, viewBefore[key]])), after: change });
    return viewOf(after);
  });
}

function viewOf(row: MeasureRecord): MeasureView {
  const { id, code, name, unit, decimals, minimum, maximum, marginKind, margin, spreadKind, spreadValue, spreadSource, typicalMean, secondsPerSample, weighting, skewed, measuredIn, rowSide, inUse } = row;
  return {
    ...{ id, code, name, unit, decimals, minimum, maximum, marginKind, margin, spreadKind, spreadValue, spreadSource, typicalMean, secondsPerSample, weighting, skewed, measuredIn, rowSide, inUse },
    confidence: row.confidence as MeasureView['confidence'],
    sampledUnit: row.sampledUnit as MeasureView['sampledUnit'],
  };
}

function codeFrom(name: string): string {
  const plain = name.normalize('NFKD').replace(/[^\p{L}\p{N}]+/gu, '-').replace(/^-|-$/g, '').toLowerCase();
  return `own-${plain || 'measure'}`.slice(0, 40);
}
