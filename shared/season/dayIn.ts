/** Calendar day at a place, as YYYY-MM-DD. An unknown time zone counts as UTC. */
export function dayIn(timeZone: string, now: Date): string {
  try {
    return new Intl.DateTimeFormat('en-CA', { timeZone, year: 'numeric', month: '2-digit', day: '2-digit' }).format(now);
  } catch (error) {
    if (!(error instanceof RangeError)) throw error;
    return now.toISOString().slice(0, 10);
  }
}
