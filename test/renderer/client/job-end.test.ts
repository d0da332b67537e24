import { describe, expect, it } from "vitest";
import { jobEnd } from "#renderer/client/job-end.ts";
import type { JobState, ServerEvent } from "#shared/api/routes.ts";

const job = (id: string, state: JobState["state"], progress = 0): ServerEvent => ({
  event: "job",
  job: { id, what: "packets", state, progress, step: "", bytesPerSecond: null, secondsLeft: null },
});

function stream() {
  const listeners = new Set<(event: ServerEvent) => void>();
  return {
    listeners,
    tell: (event: ServerEvent) => {
      for (const listener of listeners) listener(event);
    },
    client: {
      onEvent: (listener: (event: ServerEvent) => void) => {
        listeners.add(listener);
        return () => listeners.delete(listener);
      },
    },
  };
}

describe("the end of a job", () => {
  it("is the job's last state, with every state told on the way and no other job's", async () => {
    const { client, tell, listeners } = stream();
    const steps: number[] = [];
    const end = jobEnd(
      client,
      async () => ({ job: "a" }),
      ({ progress }) => steps.push(progress),
    );
    await Promise.resolve();
    tell(job("a", "running", 0.5));
    tell(job("b", "done", 1));
    tell(job("a", "failed", 0.7));
    expect((await end).state).toBe("failed");
    expect(steps).toEqual([0.5, 0.7]);
    expect(listeners.size).toBe(0);
  });

  it("is not lost when it comes before the answer that names the job", async () => {
    const { client, tell } = stream();
    const end = jobEnd(client, async () => {
      tell(job("a", "done", 1));
      return { job: "a" };
    });
    expect((await end).state).toBe("done");
  });

  it("passes on why a job could not begin, and listens no more", async () => {
    const { client, listeners } = stream();
    await expect(jobEnd(client, () => Promise.reject(new Error("refused")))).rejects.toThrow("refused");
    expect(listeners.size).toBe(0);
  });
});
