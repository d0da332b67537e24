import type { Client } from "#renderer/client/client.ts";
import type { JobState } from "#shared/api/routes.ts";

/**
 * Begins a job and gives its last state: done, failed or cancelled. Events that come before the job's name is known are not lost.
 * @param step hears every state on the way, the last included.
 * @throws what `begin` throws.
 */
export async function jobEnd(
  client: Pick<Client, "onEvent">,
  begin: () => Promise<{ job: string }>,
  step: (job: JobState) => void = () => undefined,
): Promise<JobState> {
  const latest = new Map<string, JobState>();
  let wanted: string | null = null;
  let end: (job: JobState) => void = () => undefined;
  const ended = new Promise<JobState>((resolve) => {
    end = resolve;
  });
  const hear = (job: JobState) => {
    if (job.id !== wanted) return;
    step(job);
    if (job.state !== "running") end(job);
  };
  const stop = client.onEvent((event) => {
    if (event.event !== "job") return;
    latest.set(event.job.id, event.job);
    hear(event.job);
  });
  try {
    const { job } = await begin();
    wanted = job;
    const known = latest.get(job);
    if (known !== undefined) hear(known);
    return await ended;
  } finally {
    stop();
  }
}
