/** Days of the demo, counted from the day it is laid: it always stands three weeks after veraison, shortly before picking. */
export interface DemoDays {
  /** yyyy-mm-dd, `offset` days from today. */
  day: (offset: number) => string;
  /** An instant of that day, at an hour of UTC. */
  at: (offset: number, hour: number) => Date;
  /** When today's work began: at four, or two and a half hours ago where that is earlier. Nothing of the demo lies ahead of its clock. */
  dawn: Date;
}

const beganBeforeMs = 150 * 60_000;

/** `today` is the day at the estate, `now` the instant. */
export function demoDays(today: string, now: Date): DemoDays {
  const start = Date.parse(`${today}T00:00:00Z`);
  const at = (offset: number, hour: number) => new Date(start + offset * 86_400_000 + hour * 3_600_000);
  const dawn = new Date(Math.min(at(0, 4).getTime(), now.getTime() - beganBeforeMs));
  return { at, day: (offset) => at(offset, 0).toISOString().slice(0, 10), dawn };
}

const yearDays = 365;
const seasonStart = -262;

/** Offsets from today of the season so many years ago (0 is the current one): first day, last day and phases. */
export function seasonOffsets(yearsAgo: number): { from: number; to: number; phases: Record<string, [number, number]> } {
  const shift = -yearsAgo * yearDays;
  const phase = (from: number, to: number): [number, number] => [from + shift, to + shift];
  return {
    from: seasonStart + shift,
    to: seasonStart + yearDays - 1 + shift,
    phases: { dormant: phase(seasonStart, -150), bloom: phase(-112, -96), lagPhase: phase(-62, -46), veraison: phase(-34, -19), pick: phase(8, 36), review: phase(60, 100) },
  };
}
