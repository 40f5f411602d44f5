import type { JobView } from '../../shared/contracts/jobs.ts';
import { http } from './http.ts';

const pollMs = 2000;
const finished: ReadonlySet<JobView['state']> = new Set(['done', 'failed', 'cancelled']);

export interface JobAddress {
  readonly estateId: string;
  readonly jobId: string;
}

/** True when nothing more will come. */
export function isFinished(job: JobView): boolean {
  return finished.has(job.state);
}

/**
 * Follows a job by server-sent events, and by asking every two seconds where those do not come through.
 * Returns the function that stops following.
 */
export function followJob({ estateId, jobId }: JobAddress, onChange: (job: JobView) => void): () => void {
  const path = `/api/estates/${estateId}/jobs/${jobId}`;
  let stopped = false;
  let timer: ReturnType<typeof setTimeout> | undefined;
  const source = new EventSource(`${path}/events`);

  const tell = (job: JobView) => {
    if (stopped) return;
    onChange(job);
    if (isFinished(job)) stop();
  };
  const poll = async () => {
    try {
      tell(await http.get<JobView>(path));
    } catch {
      // Out of reach for now: the next round asks again, and the page says by itself that there is no signal.
    }
    if (!stopped) timer = setTimeout(() => void poll(), pollMs);
  };
  const stop = () => {
    stopped = true;
    source.close();
    clearTimeout(timer);
  };

  source.onmessage = (event: MessageEvent<string>) => tell(JSON.parse(event.data) as JobView);
  source.onerror = () => {
    source.close();
    if (!stopped && timer === undefined) void poll();
  };
  return stop;
}
