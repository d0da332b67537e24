import type { ShelfModel } from "#renderer/shelf/shelf-model.ts";
import { bytesWords, timeLeftWords } from "#renderer/shelf/words.ts";
import type { JobState } from "#shared/api/routes.ts";

const TITLES: Readonly<Record<JobState["what"], string>> = {
  intake: "Taking in a scan",
  demo: "Making the demo valve",
  "demo-study": "Making the demo study",
  look: "Looking through a scan",
  search: "Searching a scan for strings",
  export: "Writing files",
  packets: "Making packets",
  "take-in": "Taking in a packet",
  return: "Making a return packet",
};

/** One job: how far, how fast, how long still, and a way to stop it; a failed one with its reason until put away. */
export function JobCard({ job, model }: { readonly job: JobState; readonly model: ShelfModel }) {
  if (job.state === "failed") {
    return (
      <div class="shelf-job failed" role="alert">
        <div>
          <h3>{TITLES[job.what]} failed</h3>
          <p>{job.error?.message ?? "No reason was given."} The library is as it was before.</p>
        </div>
        <button type="button" class="button" onClick={() => model.dismiss(job.id)}>
          Put away
        </button>
      </div>
    );
  }
  const percent = Math.round(job.progress * 100);
  const facts = [
    job.step,
    `${percent} %`,
    job.bytesPerSecond === null ? null : `${bytesWords(job.bytesPerSecond)} a second`,
    timeLeftWords(job.secondsLeft),
  ].filter((fact) => fact !== null);
  return (
    <div class="shelf-job">
      <div>
        <h3>{TITLES[job.what]}</h3>
        <progress max={100} value={percent} aria-label={`${TITLES[job.what]}: ${job.step}`} />
        <p class="soft">{facts.join(" · ")}</p>
      </div>
      <button type="button" class="button" onClick={() => void model.cancel(job.id)}>
        Cancel
      </button>
    </div>
  );
}
