type Level = 'silent' | 'error' | 'info';

let level: Level = 'info';

export function setLogLevel(next: Level): void {
  level = next;
}

/** One JSON line an event on standard output; errors with their stack on standard error. Never holds a request body. */
export const log = {
  info(event: string, facts: Record<string, unknown> = {}): void {
    if (level === 'info') process.stdout.write(`${JSON.stringify({ at: new Date().toISOString(), event, ...facts })}\n`);
  },
  error(event: string, error: unknown, facts: Record<string, unknown> = {}): void {
    if (level === 'silent') return;
    const detail = error instanceof Error ? { message: error.message, stack: error.stack, cause: error.cause instanceof Error ? error.cause.message : undefined } : { message: String(error) };
    process.stderr.write(`${JSON.stringify({ at: new Date().toISOString(), event, ...facts, ...detail })}\n`);
  },
};
