export interface ChartPoint {
  readonly x: number;
  readonly y: number;
  /** Ends of the range at this point; drawn as ribbon (line looks) or error bar ("points"). */
  readonly low?: number;
  readonly high?: number;
}

/**
 * measured: Slate line, ribbon, square points, the newest in ink. forecast: hatched band between low and high.
 * curve: the chosen curve, Slate 2.5. quiet: another curve, ink 1.5 dashed. points: squares with error bars, no line.
 */
export type ChartLook = 'measured' | 'forecast' | 'curve' | 'quiet' | 'points';

export interface ChartSeries {
  readonly id: string;
  readonly label: string;
  readonly look: ChartLook;
  readonly points: readonly ChartPoint[];
  /** Dash of a quiet curve, such as [3, 4]. */
  readonly dash?: readonly number[];
  /** Written at the end of the curve. */
  readonly endWord?: string;
}

/** A line from a point down to the axis, with its figure there. */
export interface ChartDrop {
  readonly x: number;
  readonly y: number;
  readonly text: string;
  readonly word?: string;
  readonly chosen?: boolean;
}

export interface ChartAxis {
  readonly low: number;
  readonly high: number;
  readonly ticks: readonly number[];
  readonly text: (value: number) => string;
}
