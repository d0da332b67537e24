import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { middleOf, type SearchRegion } from "#renderer/desk/model/overlooked-model.ts";
import type { ListedStretch } from "#shared/api/overlooked.ts";
import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { add, cross, normalise, scale } from "#shared/geometry/vec3.ts";

/** A search of the part that the section shows reaches so far before and behind it, millimetres. */
const REGION_DEPTH_MM = 5;

/** Shows a stretch: its middle in the section, and the list at it. */
export function goToStretch(model: DeskModel, stretch: ListedStretch): void {
  model.tab.value = "overlooked";
  model.overlooked.at.value = stretch.key;
  model.section.goTo(middleOf(stretch));
}

/** Goes there and proposes the string that the stretch is a part of. */
export function proposeStretch(model: DeskModel, stretch: ListedStretch): void {
  goToStretch(model, stretch);
  void model.editor.propose(middleOf(stretch));
}

/** The box about what the section shows. */
export function shownRegion({ section }: DeskModel): SearchRegion | null {
  const plane = section.plane.value;
  const { width, height } = section.paneSize.value;
  if (plane === null) return null;
  const { centre, right, down, mmPerPx } = plane;
  const along = scale(normalise(cross(right, down)), REGION_DEPTH_MM);
  const across = scale(right, (width * mmPerPx) / 2);
  const upright = scale(down, (height * mmPerPx) / 2);
  const corners = [-1, 1].flatMap((a) =>
    [-1, 1].flatMap((b) => [-1, 1].map((c) => add(centre, add(scale(across, a), add(scale(upright, b), scale(along, c)))))),
  );
  const bound = (pick: (...values: number[]) => number): Vec3 => [
    pick(...corners.map(([x]) => x)),
    pick(...corners.map(([, y]) => y)),
    pick(...corners.map(([, , z]) => z)),
  ];
  return { from: roundPoint(bound(Math.min)), to: roundPoint(bound(Math.max)) };
}
