import type { LabBench, LabResult } from '../../../shared/contracts/lab.ts';
import { measures as catalog } from '../../../shared/catalog/measures.ts';
import type { Access } from '../../access/access.ts';
import { Estate } from '../../models/Estate.ts';
import { LabFile } from '../../models/LabFile.ts';
import { MeasureRecord } from '../../models/MeasureRecord.ts';
import { Person } from '../../models/Person.ts';
import type { Reading } from '../../models/Reading.ts';
import { listBags } from '../bags/listBags.ts';
import { judgeResults } from './judgeResults.ts';
import { newestResults } from './newestResults.ts';

/** Everything on the lab's bench: bags, the measures of the lab, their newest figures, and how those stand to each other. */
export async function labBench(access: Access, now: Date): Promise<LabBench> {
  const { estateId } = access;
  const { timeZone } = await Estate.query().findById(estateId).select('timeZone').throwIfNotFound();
  const bags = await listBags(access, { now });
  const measures = await MeasureRecord.query().where({ estateId, measuredIn: 'lab' }).orderBy('code');
  const place = (code: string) => (catalog.findIndex((measure) => measure.code === code) + 1 || catalog.length + 1);
  measures.sort((a, b) => place(a.code) - place(b.code));
  const rows = await newestResults(estateId, bags.map(({ id }) => id));
  const people = await Person.query().findByIds([...new Set(rows.flatMap(({ personId, stateBy, exclusionProposal }) => [personId, stateBy, exclusionProposal?.by ?? null]).filter((id) => id !== null))]).select('id', 'name');
  const files = await LabFile.query().where({ estateId }).whereIn('id', rows.flatMap(({ labFileId }) => labFileId ?? [])).select('id', 'fileName');
  const nameOf = (id: string | null) => people.find((person) => person.id === id)?.name ?? null;
  const results = rows.map((row): LabResult => ({
    id: row.id, bagId: row.bagId!, measureCode: row.measureCode, value: row.value, below: flagsOf(row).includes('belowDetection'), typed: row.valueTyped, unitTyped: row.unitTyped,
    instrument: row.instrument, method: row.method, analysedOn: row.analysedOn, state: row.state, stateBy: nameOf(row.stateBy), stateAt: row.stateAt?.toISOString() ?? null,
    person: nameOf(row.personId), receivedAt: row.receivedAt.toISOString(), fileName: files.find(({ id }) => id === row.labFileId)?.fileName ?? null,
    corrected: row.supersedes !== null, flags: flagsOf(row), excludedReason: row.excludedReason,
    exclusionProposal: row.exclusionProposal === null ? null : { ...row.exclusionProposal, by: nameOf(row.exclusionProposal.by) },
  }));
  return {
    measures: measures.map(({ code, name, unit, decimals, minimum, maximum, confidence, inUse }) => ({ code, name, unit, decimals, minimum, maximum, confidence, inUse })),
    bags, results, groups: judgeResults(results, bags, { measures, timeZone }),
  };
}

const flagsOf = (row: Reading) => row.flags as string[];
