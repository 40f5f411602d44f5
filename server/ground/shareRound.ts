import type { XY } from '../../shared/geo/coordinates.ts';
import type { BlockRows } from '../../shared/geo/rows.ts';
import { sheetOfBlock, shareBlockWalk, type BlockWalk } from '../../shared/sampling/walkBlock.ts';
import type { PaceChoices } from '../../shared/contracts/planChoices.ts';
import { pacedGround, type Terrain } from '../../shared/sampling/terrain.ts';
import type { AlleySide } from '../../shared/sampling/rowSide.ts';
import type { SheetLine } from '../../shared/sampling/walkSheet.ts';
import { walkTime } from '../../shared/sampling/walkTime.ts';

export interface ShareInput {
  rows: BlockRows;
  vines: { rowIndex: number; ordinal: number; side?: AlleySide; zone: number; serviceS: number }[];
  gateXY: XY;
  people: number;
  pace: PaceChoices;
  terrain: Terrain | null;
  /** Back to the gate (usual), or over at the last vine. */
  end?: 'gate' | 'anywhere';
}

export interface WalkShare {
  lengthM: number;
  walkingS: number;
  serviceS: number;
  /** The way, in UTM metres. */
  pathXY: readonly XY[];
  /** In walking order; `target` is the index of the vine in the input. */
  lines: SheetLine[];
}

export interface SharedRound {
  walks: WalkShare[];
  /** Whether the loads lie within 15 percent; else the largest is the least possible. */
  isEven: boolean;
}

/** The walks of a round, one a person, each from the gate and back (or ending at the last vine), with loads as even as contiguous runs of rows allow. */
export function shareRound({ rows, vines, gateXY, people, pace, terrain, end = 'gate' }: ShareInput): SharedRound {
  const serviceSOf = (vine: number) => vines[vine]!.serviceS;
  const { walks, isEven } = shareBlockWalk({ rows, vines, gateXY, end, ground: pacedGround(pace, terrain) }, { people, serviceSOf });
  return {
    isEven,
    walks: walks.map((walk: BlockWalk) => {
      const time = walkTime(walk.walk, serviceSOf);
      return { lengthM: walk.walk.lengthM, walkingS: time.walkingS, serviceS: time.serviceS, pathXY: walk.pathXY, lines: sheetOfBlock({ rows, vines }, walk, (vine) => vines[vine]!.zone) };
    }),
  };
}
