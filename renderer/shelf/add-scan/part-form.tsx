import type { FlatBox } from "#renderer/shelf/add-scan/box-drag.ts";
import { BoxPicture } from "#renderer/shelf/add-scan/box-picture.tsx";
import type { LookState } from "#renderer/shelf/add-scan/look-through.ts";
import { type PartDraft, partOf, typedEdges } from "#renderer/shelf/add-scan/part-draft.ts";
import { countWords, timeLeftWords } from "#renderer/shelf/words.ts";
import type { ProjectionsAnswer } from "#shared/api/projections.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { faultOfCrop } from "#shared/volume/region/region.ts";

export interface PartFormProps {
  readonly size: Vec3;
  /** Millimetres, or null while it is not settled. */
  readonly spacing: Vec3 | null;
  readonly draft: PartDraft;
  readonly change: (change: Partial<PartDraft>) => void;
  readonly look: LookState;
  readonly beginLook: () => void;
  readonly stopLook: () => void;
}

const AXES = ["x", "y", "z"] as const;
/** The axes across and down each picture. */
const VIEWS = [
  { key: "alongZ", across: 0, down: 1 },
  { key: "alongY", across: 0, down: 2 },
  { key: "alongX", across: 1, down: 2 },
] as const satisfies readonly { key: keyof ProjectionsAnswer; across: number; down: number }[];
/** Page pixels of the longest side. */
const LONGEST = 188;

/** What of the scan is kept: all of it, or a box that is typed or drawn on three projections; halved or not. */
export function PartForm(props: PartFormProps) {
  const { size, draft, change } = props;
  const part = partOf(size, draft);
  return (
    <fieldset>
      <legend>How much of it</legend>
      <label class="scan-choice">
        <input type="checkbox" checked={draft.isBox} onChange={(event) => change({ isBox: event.currentTarget.checked })} />
        <span>only a box of it</span>
      </label>
      {draft.isBox ? <Box {...props} /> : null}
      <label class="scan-choice">
        <input type="checkbox" checked={draft.isBinned} onChange={(event) => change({ isBinned: event.currentTarget.checked })} />
        <span>half as fine: the mean of each 2 × 2 × 2 voxels, an eighth of the size</span>
      </label>
      {"fault" in part ? (
        <p class="warn" role="alert">
          {part.fault}
        </p>
      ) : null}
      {"region" in part && part.region !== null ? (
        <p class="soft">
          Places in millimetres stay what they are: trees drawn on this part lie right on the whole scan. The whole scan is read
          once either way, for its hash.
        </p>
      ) : null}
    </fieldset>
  );
}

function Box({ size, spacing, draft, change, look, beginLook, stopLook }: PartFormProps) {
  const edges = typedEdges(draft);
  const isGood = faultOfCrop(size, edges) === null;
  const set = (axis: number, text: string) => change({ edges: draft.edges.map((before, k) => (k === axis ? text : before)) });
  const flat = (across: number, down: number): FlatBox | null =>
    isGood ? [edges[across]!, edges[down]!, edges[across + 3]!, edges[down + 3]!] : null;
  const setFlat = (across: number, down: number, box: FlatBox) => {
    const next = isGood ? [...edges] : [0, 0, 0, ...size];
    [next[across], next[down], next[across + 3], next[down + 3]] = box;
    change({ edges: next.map(String) });
  };
  const sides = AXES.map((_, axis) => size[axis]! * (spacing?.[axis] ?? 1));
  const scale = LONGEST / Math.max(...sides);
  const pixels = (axis: number) => Math.max(24, Math.round(sides[axis]! * scale));
  return (
    <>
      <div class="part-edges">
        {AXES.map((name, axis) => (
          <div key={name} class="part-axis">
            <Edge label={`${name} from`} value={draft.edges[axis]!} most={size[axis]!} set={(text) => set(axis, text)} />
            <Edge label={`${name} to`} value={draft.edges[axis + 3]!} most={size[axis]!} set={(text) => set(axis + 3, text)} />
          </div>
        ))}
        <button type="button" class="button" onClick={() => change({ edges: [0, 0, 0, ...size].map(String) })}>
          Box round all
        </button>
      </div>
      <p class="soft">
        Voxels from 0 as the file has them; ‘from’ is in, ‘to’ is out. Type the edges, or draw the box in the pictures and drag
        its sides.
      </p>
      {look.state === "running" ? (
        <div class="part-look">
          <progress max={100} value={Math.round(look.progress * 100)} aria-label="Looking through the scan" />
          <span class="soft">{["Looking through the scan", timeLeftWords(look.secondsLeft)].filter(Boolean).join(" · ")}</span>
          <button type="button" class="button" onClick={stopLook}>
            Stop looking
          </button>
        </div>
      ) : null}
      {look.state === "stopped" || look.state === "failed" ? (
        <div class="part-look">
          <span class={look.state === "failed" ? "warn" : "soft"} role={look.state === "failed" ? "alert" : undefined}>
            {look.state === "failed" ? look.message : "No pictures; the numbers can be typed without them."}
          </span>
          <button type="button" class="button" onClick={beginLook}>
            Look through it
          </button>
        </div>
      ) : null}
      {look.state === "done" ? (
        <>
          <div class="part-pictures">
            {VIEWS.map(({ key, across, down }) => (
              <BoxPicture
                key={key}
                picture={look.answer[key]}
                axes={[AXES[across]!, AXES[down]!]}
                sides={[size[across]!, size[down]!]}
                pixels={[pixels(across), pixels(down)]}
                box={flat(across, down)}
                change={(box) => setFlat(across, down, box)}
              />
            ))}
          </div>
          <p class="soft">
            {look.answer.slices < look.answer.of
              ? `The strongest voxels along each axis, from ${countWords(look.answer.slices)} of ${countWords(look.answer.of)} slices evenly spread: something thin may lie between them.`
              : "The strongest voxels along each axis."}
          </p>
        </>
      ) : null}
    </>
  );
}

interface EdgeProps {
  readonly label: string;
  readonly value: string;
  readonly most: number;
  readonly set: (text: string) => void;
}

function Edge({ label, value, most, set }: EdgeProps) {
  return (
    <label>
      <span>{label}</span>
      <input
        class="field figures"
        type="number"
        min={0}
        max={most}
        step={1}
        aria-label={`Box, ${label}`}
        value={value}
        onInput={(event) => set(event.currentTarget.value)}
      />
    </label>
  );
}
