/** Noon of a calendar day (YYYY-MM-DD) at a place: the instant of a reading of which only the day is known. An unknown time zone counts as UTC. */
export function noonIn(timeZone: string, day: string): Date {
  const utc = Date.parse(`${day}T12:00:00Z`);
  try {
    const parts = new Map(new Intl.DateTimeFormat('en-CA', { timeZone, hourCycle: 'h23', year: 'numeric', month: '2-digit', day: '2-digit', hour: '2-digit', minute: '2-digit' }).formatToParts(new Date(utc)).map(({ type, value }) => [type, Number(value)]));
    const shown = Date.UTC(parts.get('year')!, parts.get('month')! - 1, parts.get('day')!, parts.get('hour')!, parts.get('minute')!);
    return new Date(utc - (shown - utc));
  } catch (error) {
    if (!(error instanceof RangeError)) throw error;
    return new Date(utc);
  }
}
