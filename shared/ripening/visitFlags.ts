/** What stands beside a visit's figures because it may explain them. Limits are judgement and can be changed. */
export interface VisitConditions {
  readonly wetFruit: boolean | null;
  /** Rain on the day and the two days before, mm. */
  readonly rainMm: number | null;
  /** Highest temperature on the day and the two days before, °C. */
  readonly maxC: number | null;
}

export type VisitFlag = 'wetFruit' | 'rain' | 'heat';

export interface FlagLimits {
  readonly rainMm: number;
  readonly maxC: number;
}

const FLAG_LIMITS: FlagLimits = { rainMm: 5, maxC: 35 };

/** Wet fruit and rain dilute, heat concentrates; unknown conditions raise no flag. */
export function visitFlags({ wetFruit, rainMm, maxC }: VisitConditions, limits = FLAG_LIMITS): VisitFlag[] {
  const flags: VisitFlag[] = [];
  if (wetFruit === true) flags.push('wetFruit');
  if (rainMm !== null && rainMm >= limits.rainMm) flags.push('rain');
  if (maxC !== null && maxC >= limits.maxC) flags.push('heat');
  return flags;
}
