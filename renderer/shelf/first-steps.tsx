import { CAUTIONS } from "#renderer/app/about-sheet.tsx";

const STEPS: readonly (readonly [string, string])[] = [
  [
    "Bring a scan",
    "Add your own micro-CT scan, or open the demo valve, a synthetic one that needs no file. You confirm the voxel size.",
  ],
  [
    "Trace on the desk",
    "Start a pass under your annotator name. Click along a string, from muscle to leaflet; the guide follows the image.",
  ],
  ["Leave with trees", "Every edit is saved as you go and can be undone, also tomorrow. Export trees that other programs read."],
];

/** What to do first, and what the program is not for; shown until it is put away. */
export function FirstSteps({ putAway }: { readonly putAway: () => void }) {
  return (
    <section class="shelf-first pane" aria-labelledby="first-steps">
      <div class="shelf-first-head">
        <h2 id="first-steps">Three steps to the first tree</h2>
        <button type="button" class="button plain" onClick={putAway}>
          Put away
        </button>
      </div>
      <ol>
        {STEPS.map(([title, text]) => (
          <li key={title}>
            <h3>{title}</h3>
            <p>{text}</p>
          </li>
        ))}
      </ol>
      <p class="shelf-cautions">{CAUTIONS.join(" ")}</p>
    </section>
  );
}
