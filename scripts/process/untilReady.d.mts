export interface Waiting { isRunning: () => boolean; withinMs?: number; tryMs?: number; pauseMs?: number }
export function waitForAnswer(url: string, waiting: Waiting): Promise<string | null>;
