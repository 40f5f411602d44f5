import type { z } from 'zod';
import type { stateChange } from '../../../shared/contracts/lab.ts';
import { may } from '../../../shared/catalog/permissions.ts';
import type { Access } from '../../access/access.ts';
import { Clash, Missing } from '../../errors.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Reading } from '../../models/Reading.ts';
import { say } from '../../sentences/say.ts';

/**
 * Marks results as checked or final, or takes them back to provisional, with who and when. What somebody proposed to
 * leave out must be decided before it can be final.
 */
export async function setResultState(access: Access, { resultIds, state }: z.infer<typeof stateChange>, now: Date): Promise<void> {
  const { estateId, personId } = access;
  await Reading.transaction(async (trx) => {
    const rows = await Reading.query(trx).where({ estateId, source: 'lab' }).whereIn('id', resultIds).forUpdate();
    if (rows.length !== new Set(resultIds).size) throw new Missing(say('unknownResults'));
    if (state === 'final' && rows.some((row) => row.exclusionProposal !== null && row.excludedReason === null)) throw new Clash('proposed', say('exclusionProposed'));
    await Reading.query(trx).where({ estateId }).whereIn('id', resultIds).patch({ state, stateBy: personId, stateAt: now });
    const before = Object.fromEntries(['provisional', 'checked', 'final'].map((each) => [each, rows.filter((row) => row.state === each).length]));
    await writeAudit(trx, access, { action: 'lab.state', subjectType: 'results', subjectId: resultIds[0]!, before, after: { state, count: rows.length, resultIds } });
  });
}

/**
 * Leaves a result out with a reason, or takes it in again (reason null). Whoever may only propose leaves a proposal that
 * somebody else decides. The figure itself stays.
 */
export async function excludeResult(access: Access, resultId: string, reason: string | null, now: Date): Promise<{ proposed: boolean }> {
  const { estateId, personId } = access;
  const decides = may(access.roles, 'outliers.exclude');
  return Reading.transaction(async (trx) => {
    const row = await Reading.query(trx).findOne({ estateId, id: resultId, source: 'lab' }).forUpdate().throwIfNotFound();
    if (!decides && row.excludedReason !== null) throw new Clash('decided', say('exclusionDecided'));
    const change = decides
      ? { excludedReason: reason, excludedBy: reason === null ? null : personId, exclusionProposal: null }
      : { exclusionProposal: reason === null ? null : { reason, by: personId, at: now.toISOString() } };
    await Reading.query(trx).where({ estateId, id: resultId }).patch(change);
    const action = decides ? (reason === null ? 'readings.include' : 'readings.exclude') : 'lab.proposeExclusion';
    await writeAudit(trx, access, { action, subjectType: 'reading', subjectId: resultId, before: { excludedReason: row.excludedReason, proposal: row.exclusionProposal }, reason });
    return { proposed: !decides };
  });
}
