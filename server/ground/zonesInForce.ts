import type { QueryBuilder } from 'objection';
import { Zoning } from '../models/Zoning.ts';

/** Zones in force on each block, one set a block: of the newest season that has any, since those of a season before stay in force for that season. */
export function zonesInForce(estateId: string): QueryBuilder<Zoning, Zoning[]> {
  return Zoning.query()
    .where({ 'zonings.estateId': estateId, 'zonings.state': 'live' })
    .whereRaw("zonings.season_id = (select s.id from zonings z join seasons s on s.id = z.season_id where z.estate_id = zonings.estate_id and z.block_id = zonings.block_id and z.state = 'live' order by s.starts_on desc limit 1)");
}
