import type { XY } from '../../shared/geo/coordinates.ts';
import type { BlockRows } from '../../shared/geo/rows.ts';
import { sheetOfBlock, shareBlockWalk, type BlockWalk } from '../../shared/sampling/walkBlock.ts';
import type { SheetLine } from '../../shared/sampling/walkSheet.ts';
import { walkTime } from '../../shared/sampling/walkTime.ts';

export interface ShareInput {
  rows: BlockRows;
  vines: { rowIndex: number; ordinal: number; zone: number; serviceS: number }[];
  gateXY: XY;
  people: number;
}

export interface WalkShare {
  lengthM: number;
  walkingS: number;
  serviceS: number;
  /** In walking order; `target` is the index of the vine in the input. */
  lines: SheetLine[];
}

/** The walks of a round, one a person, each from the gate and back, with loads as even as contiguous runs of rows allow. */
export function shareRound({ rows, vines, gateXY, people }: ShareInput): WalkShare[] {
  const serviceSOf = (vine: number) => vines[vine]!.serviceS;
  const { walks } = shareBlockWalk({ rows, vines, gateXY }, { people, serviceSOf });
  return walks.map((walk: BlockWalk) => {
    const time = walkTime(walk.walk, serviceSOf);
    return { lengthM: walk.walk.lengthM, walkingS: time.walkingS, serviceS: time.serviceS, lines: sheetOfBlock({ rows, vines }, walk, (vine) => vines[vine]!.zone) };
  });
}
