import { Sheet } from "#renderer/app/sheet.tsx";
import { addLandmark, LANDMARK_KINDS, landmarkCount, removeLandmarks } from "#renderer/desk/model/landmarks.ts";
import type { DeskSheetProps } from "#renderer/desk/sheets/sheet-props.ts";
import { valveAxes } from "#shared/geometry/valve-axes.ts";

/**
 * Landmarks that stand the valve upright: bring a place to the middle of the section, then say here what it is. It can wait,
 * and be done again.
 */
export function UprightSheet({ model, close }: DeskSheetProps) {
  const { landmarks } = model.specimen.value;
  const at = model.section.plane.value?.centre;
  const upright = valveAxes(landmarks) !== null;
  return (
    <Sheet title="Stand the valve upright" close={close} kind="small-sheet">
      <p>
        Bring a place to the middle of the section, open this sheet (Shift + U) and say what it is. One muscle head and one place
        of the annulus, or a commissure, are enough; both muscles settle the front.
      </p>
      <p class={upright ? "good" : "soft"}>
        {upright
          ? "The valve stands upright: flat, front and side are its own planes."
          : "Not settled yet: flat, front and side are the scan's axes."}
      </p>
      <ul class="landmark-list">
        {LANDMARK_KINDS.map(({ kind, label }) => (
          <li key={kind} class="row">
            <span>{label}</span>
            <span class="figures soft landmark-count">{landmarkCount(landmarks, kind)} set</span>
            <span class="spring" />
            <button
              type="button"
              class="button"
              disabled={landmarkCount(landmarks, kind) === 0}
              onClick={() => void removeLandmarks(model, kind)}
            >
              remove
            </button>
            <button type="button" class="button" disabled={at === undefined} onClick={() => void addLandmark(model, kind, at!)}>
              it is here
            </button>
          </li>
        ))}
      </ul>
    </Sheet>
  );
}
