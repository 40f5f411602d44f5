import { groundKinds } from '../../../shared/contracts/zonings.ts';

export type GroundKind = (typeof groundKinds)[number];

/** Its number among colours and patterns, 1 for steady ground. */
export function groundNumber(kind: GroundKind): number {
  return groundKinds.indexOf(kind) + 1;
}
