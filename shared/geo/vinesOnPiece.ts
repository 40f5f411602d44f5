/** How vines stand on one piece of a row: the first at `firstVineM` from its start end, then every `stepM`. */
export interface VineSpread {
  readonly vineCount: number;
  readonly firstVineM: number;
  readonly stepM: number;
}

export type VineAlign = 'centred' | 'fromStart' | 'fromEnd';

export interface VineSpacing {
  readonly spacingM: number;
  /** Least distance from a piece's end to its first vine. */
  readonly endOffsetM: number;
  readonly align: VineAlign;
  /** How much shorter the piece may be than its vines need: what surveying and rounding take off. */
  readonly slackM?: number;
}

/** As many vines as fit with `endOffsetM` kept at both ends; the remainder is shared by both ends unless aligned to one. */
export function vinesOnPiece(lengthM: number, spacing: VineSpacing): VineSpread {
  const { spacingM, endOffsetM, align, slackM = 0 } = spacing;
  const room = lengthM + slackM - 2 * endOffsetM;
  const vineCount = room < 0 ? 0 : Math.floor(room / spacingM + 1e-6) + 1;
  const span = (vineCount - 1) * spacingM;
  const firstVineM = {
    centred: (lengthM - span) / 2,
    fromStart: endOffsetM,
    fromEnd: lengthM - endOffsetM - span,
  }[align];
  return { vineCount, firstVineM: vineCount === 0 ? 0 : firstVineM, stepM: spacingM };
}

/**
 * A number of vines counted in the field, spread evenly over the pieces of a row: pieces share the count by length
 * (largest remainder), and each vine has an equal stretch of its piece.
 */
export function countedVines(pieceLengthsM: readonly number[], vineCount: number): VineSpread[] {
  const total = pieceLengthsM.reduce((sum, length) => sum + length, 0);
  const exact = pieceLengthsM.map((length) => (vineCount * length) / total);
  const counts = exact.map((share) => Math.floor(share));
  const byRemainder = exact
    .map((share, piece) => ({ piece, remainder: share - Math.floor(share) }))
    .sort((a, b) => b.remainder - a.remainder || a.piece - b.piece);
  let left = vineCount - counts.reduce((sum, count) => sum + count, 0);
  for (const { piece } of byRemainder) {
    if (left <= 0) break;
    counts[piece]! += 1;
    left -= 1;
  }
  return pieceLengthsM.map((length, piece) => {
    const count = counts[piece]!;
    const stepM = count === 0 ? 0 : length / count;
    return { vineCount: count, firstVineM: stepM / 2, stepM };
  });
}
