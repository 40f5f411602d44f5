import { shallowRef, type InjectionKey, type ShallowRef } from 'vue';

/** What ledger, gutter and map of one screen tell each other, so that the leader can be drawn between them. */
export interface TwinLink {
  /** The chosen line of the ledger as it stands on the page; null when nothing is chosen. */
  readonly line: ShallowRef<HTMLElement | null>;
  /** Where the leader enters the map, px from the map's top; null when the chosen shape is out of view. */
  readonly mapY: ShallowRef<number | null>;
  /** Grows whenever something moved without its value changing: scrolling, sorting, a resize. */
  readonly moved: ShallowRef<number>;
  /** False while the map lies below: there is no leader then. */
  readonly isBeside: ShallowRef<boolean>;
  /** `m` was pressed: to the map, or back to the ledger. */
  readonly jump: ShallowRef<'map' | 'ledger' | null>;
}

export const twinLinkKey: InjectionKey<TwinLink> = Symbol('twinLink');

export function createTwinLink(): TwinLink {
  return { line: shallowRef(null), mapY: shallowRef(null), moved: shallowRef(0), isBeside: shallowRef(true), jump: shallowRef(null) };
}
