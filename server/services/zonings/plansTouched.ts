import type { PublishEffects } from '../../../shared/contracts/zonings.ts';
import { vineIndex } from '../../../shared/geo/vines.ts';
import type { Access } from '../../access/access.ts';
import type { BlockVines } from '../../ground/blockVines.ts';
import { Plan } from '../../models/Plan.ts';
import { Target } from '../../models/Target.ts';
import { Zoning } from '../../models/Zoning.ts';

/**
 * Plans that still count and stand on the zones to be replaced, with how many of their vines would then be in another zone. A plan of
 * an earlier version with the same zones stands on them too: that version was taken up again.
 */
export async function plansTouched(access: Access, { live, ground, isMoved }: { live: Zoning; ground: BlockVines; isMoved: (vine: number) => boolean }): Promise<PublishEffects['plans']> {
  const { estateId } = access;
  const sameZones = Zoning.query().where({ estateId, blockId: live.blockId, seasonId: live.seasonId, labels: live.labels }).select('id');
  const plans = await Plan.query().where({ estateId }).whereIn('zoningId', sameZones).whereNot({ state: 'closed' }).orderBy('createdAt').select('id', 'name', 'state');
  const targets = await Target.query().where({ estateId }).whereIn('planId', plans.map(({ id }) => id)).select('planId', 'rowId', 'ordinal');
  const vineOf = ({ rowId, ordinal }: Target): number => {
    const row = ground.rowIndexOf.get(rowId);
    return row === undefined ? -1 : vineIndex(ground.vines, row, ordinal);
  };
  return plans.map(({ id, name, state }) => {
    const vines = targets.filter(({ planId }) => planId === id).map(vineOf);
    return { id, name, isDraft: state === 'draft', vines: vines.length, vinesMoved: vines.filter((vine) => vine >= 0 && isMoved(vine)).length };
  });
}
