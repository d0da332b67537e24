import { timeLeftWords } from "#renderer/shelf/words.ts";
import type { UsedJob } from "#renderer/study/parts/use-job.ts";

/** How far a job is, with a way to stop it; why it failed. Nothing while there is none. @param label of the bar */
export function JobLine({ job: { run, cancel }, label }: { readonly job: UsedJob; readonly label: string }) {
  if (run.kind === "failed") {
    return (
      <p class="study-refusal" role="alert">
        {run.message}
      </p>
    );
  }
  if (run.kind !== "running") return null;
  const percent = Math.round(100 * (run.job?.progress ?? 0));
  const left = timeLeftWords(run.job?.secondsLeft ?? null);
  return (
    <div class="job-line" role="status">
      <progress max={100} aria-label={label} {...(run.job === null ? {} : { value: percent })} />
      <p class="soft">
        {run.job?.step ?? "Beginning"} · {percent} %{left === null ? "" : ` · ${left}`}
      </p>
      <button type="button" class="button" onClick={cancel}>
        Stop
      </button>
    </div>
  );
}
