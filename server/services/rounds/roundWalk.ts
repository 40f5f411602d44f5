import type { SheetLine } from '../../../shared/sampling/walkSheet.ts';

/** One stop as it is stored with the round: the vine's words are put in when it is read. */
export type StoredStop = Pick<SheetLine, 'number' | 'enterBy' | 'heading' | 'ahead' | 'aheadFrom' | 'opensZone'> & { targetId: string };

/** The walks of a round as they were sent: later changes of zones or rows leave them as they are. */
export interface RoundWalk {
  shares: { personId: string; lengthM: number; walkingS: number; serviceS: number; stops: StoredStop[] }[];
}
