import { useEffect, useRef, useState } from "preact/hooks";
import { tellJob } from "#renderer/app/told-jobs.ts";
import type { Client } from "#renderer/client/client.ts";
import { jobEnd } from "#renderer/client/job-end.ts";
import type { JobResult, JobState } from "#shared/api/routes.ts";

/** Where a job of this screen stands. `failed` also when it could not begin. */
export type JobRun =
  | { readonly kind: "idle" }
  | { readonly kind: "running"; readonly job: JobState | null }
  | { readonly kind: "failed"; readonly message: string }
  | { readonly kind: "done"; readonly result: JobResult };

export interface UsedJob {
  readonly run: JobRun;
  readonly start: (begin: () => Promise<{ job: string }>) => Promise<void>;
  readonly cancel: () => void;
  /** Forgets how the last one ended. */
  readonly reset: () => void;
}

/** One job at a time, begun and followed by a screen. A job goes on when its screen closes; the shelf shows it then. */
export function useJob(client: Pick<Client, "onEvent" | "cancelJob">): UsedJob {
  const [run, setRun] = useState<JobRun>({ kind: "idle" });
  const here = useRef(true);
  const leave = useRef<() => void>(() => undefined);
  useEffect(() => {
    here.current = true;
    return () => {
      here.current = false;
      leave.current();
    };
  }, []);
  const show = (next: JobRun) => {
    if (here.current) setRun(next);
  };
  const start = async (begin: () => Promise<{ job: string }>) => {
    show({ kind: "running", job: null });
    let ended = false;
    const begun = async () => {
      const answer = await begin();
      if (here.current) leave.current = tellJob(answer.job, () => ended);
      return answer;
    };
    try {
      const end = await jobEnd(client, begun, (job) => {
        ended = job.state !== "running";
        if (!ended) show({ kind: "running", job });
      });
      if (end.state === "done") show({ kind: "done", result: end.result ?? {} });
      else if (end.state === "cancelled") show({ kind: "idle" });
      else show({ kind: "failed", message: end.error?.message ?? "It failed without a reason." });
    } catch (error) {
      show({ kind: "failed", message: error instanceof Error ? error.message : String(error) });
    }
  };
  return {
    run,
    start,
    cancel: () => {
      // Without a connection there is nothing to stop; the banner above the page says so.
      if (run.kind === "running" && run.job !== null) client.cancelJob(run.job.id).catch(() => undefined);
    },
    reset: () => show({ kind: "idle" }),
  };
}
