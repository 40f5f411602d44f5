/** Probability models of one LZMA state; all start at one half (1024 of 2048). */
export interface Models {
  isMatch: Uint16Array;
  isRep: Uint16Array;
  isRep0: Uint16Array;
  isRep1: Uint16Array;
  isRep2: Uint16Array;
  isRep0Long: Uint16Array;
  slot: Uint16Array;
  special: Uint16Array;
  align: Uint16Array;
  matchLength: Uint16Array;
  repLength: Uint16Array;
  literal: Uint16Array;
}

function half(count: number): Uint16Array {
  return new Uint16Array(count).fill(1024);
}

/** Fresh models; `literalBits` = literal context plus literal position bits. */
export function newModels(literalBits: number): Models {
  return {
    isMatch: half(12 << 4),
    isRep: half(12),
    isRep0: half(12),
    isRep1: half(12),
    isRep2: half(12),
    isRep0Long: half(12 << 4),
    slot: half(4 * 64),
    special: half(128),
    align: half(16),
    matchLength: half(2 + 16 * 8 * 2 + 256),
    repLength: half(2 + 16 * 8 * 2 + 256),
    literal: half(0x300 << literalBits),
  };
}
