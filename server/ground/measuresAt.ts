import { AuditEntry } from '../models/AuditEntry.ts';
import { MeasureRecord } from '../models/MeasureRecord.ts';

/** Measures of the estate by code; with `until` with the margins, confidences and starting values that stood at that moment, by the history of their changes. */
export async function loadMeasures(estateId: string, until: Date | null = null): Promise<MeasureRecord[]> {
  const measures = await MeasureRecord.query().where({ estateId }).orderBy('code');
  if (until === null) return measures;
  const later = await AuditEntry.query().where({ estateId, action: 'measures.change' }).where('at', '>', until).orderBy('id', 'desc').select('subjectId', 'before');
  // Newest first: the change next after that moment is undone last.
  for (const { subjectId, before } of later) {
    const measure = measures.find(({ id }) => id === subjectId);
    if (measure) Object.assign(measure, before);
  }
  return measures;
}
