import { StillPicture } from "#renderer/study/protocol/still-picture.tsx";
import type { PointRule } from "#shared/study/protocol.ts";

export interface PointRowsProps {
  readonly points: readonly PointRule[];
  readonly set: (points: readonly PointRule[]) => void;
  /** Keeps a picture with the study and gives its hash; rejects with a sentence when it is none. */
  readonly keepPicture: (file: File) => Promise<string>;
  /** A kept picture as a PNG. */
  readonly readPicture: (sha256: string) => Promise<Blob>;
  readonly failed: (error: unknown) => void;
}

/** Points that every protocol says something about. */
const ALWAYS = ["origin", "insertion", "fork"];

/** Where exactly a point is set: a sentence and a still picture for each. */
export function PointRows({ points, set, keepPicture, readPicture, failed }: PointRowsProps) {
  const change = (k: number, part: Partial<PointRule>) => set(points.map((rule, i) => (i === k ? { ...rule, ...part } : rule)));
  const choose = async (k: number, file: File | undefined) => {
    if (file === undefined) return;
    try {
      change(k, { picture: await keepPicture(file) });
    } catch (error) {
      failed(error);
    }
  };
  return (
    <div class="study-rows">
      {points.map((rule, k) => (
        <div
          key={`${k} of ${points.length}`}
          class="study-row point-row"
          role="group"
          aria-label={`Rule for the ${rule.point || "new point"}`}
        >
          {ALWAYS.includes(rule.point) ? (
            <h4>{rule.point}</h4>
          ) : (
            <label class="stacked">
              <span>Point</span>
              <input
                class="field"
                value={rule.point}
                maxLength={40}
                onInput={(event) => change(k, { point: event.currentTarget.value })}
              />
            </label>
          )}
          <label class="stacked">
            <span>is set at</span>
            <textarea
              class="field"
              rows={3}
              value={rule.text}
              maxLength={1000}
              onInput={(event) => change(k, { text: event.currentTarget.value })}
            />
          </label>
          <div class="point-still">
            {rule.picture === null ? (
              <p class="soft">no still picture</p>
            ) : (
              <StillPicture sha256={rule.picture} read={readPicture} label={`Still picture: ${rule.point}`} />
            )}
            <div class="row">
              <label class="button still-choice">
                {rule.picture === null ? "Choose a picture" : "Another picture"}
                <input
                  class="unseen"
                  type="file"
                  accept="image/png"
                  aria-label={`Still picture for the ${rule.point || "point"} (PNG)`}
                  onChange={(event) => void choose(k, event.currentTarget.files?.[0])}
                />
              </label>
              {rule.picture === null ? null : (
                <button type="button" class="button plain" onClick={() => change(k, { picture: null })}>
                  Without<span class="unseen"> a picture for the {rule.point}</span>
                </button>
              )}
              {ALWAYS.includes(rule.point) ? null : (
                <button type="button" class="button plain" onClick={() => set(points.filter((_, i) => i !== k))}>
                  Take out<span class="unseen"> the rule for {rule.point}</span>
                </button>
              )}
            </div>
          </div>
        </div>
      ))}
      <div>
        <button type="button" class="button" onClick={() => set([...points, { point: "", text: "", picture: null }])}>
          Add a rule
        </button>
      </div>
    </div>
  );
}
