import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { type PointMm, roundPoint } from "#shared/geometry/types.ts";
import type { Landmarks, Muscle } from "#shared/trees/document.ts";

export type LandmarkKind = "antero-lateral" | "postero-medial" | "annulus" | "commissure";

export const LANDMARK_KINDS: readonly { readonly kind: LandmarkKind; readonly label: string }[] = [
  { kind: "antero-lateral", label: "Head of the antero-lateral muscle" },
  { kind: "postero-medial", label: "Head of the postero-medial muscle" },
  { kind: "annulus", label: "Place on the annulus" },
  { kind: "commissure", label: "Commissure (antero-lateral first)" },
];

/** How many landmarks of a kind are set. */
export function landmarkCount(landmarks: Landmarks, kind: LandmarkKind): number {
  switch (kind) {
    case "annulus":
      return landmarks.annulus?.points.length ?? 0;
    case "commissure":
      return landmarks.commissures?.length ?? 0;
    default:
      return (landmarks.muscleHeads ?? []).filter((head) => head.muscle === kind).length;
  }
}

/** The landmarks with one more. Heads of a muscle are numbered in the order in which they are set. */
export function withLandmark(landmarks: Landmarks, kind: LandmarkKind, at: PointMm): Landmarks {
  const position = roundPoint(at);
  switch (kind) {
    case "annulus":
      return {
        ...landmarks,
        annulus: { closed: landmarks.annulus?.closed ?? true, points: [...(landmarks.annulus?.points ?? []), position] },
      };
    case "commissure":
      return { ...landmarks, commissures: [...(landmarks.commissures ?? []), position] };
    default: {
      const muscle: Muscle = kind;
      const heads = landmarks.muscleHeads ?? [];
      const head = heads.filter((one) => one.muscle === muscle).length + 1;
      return { ...landmarks, muscleHeads: [...heads, { muscle, head, position }] };
    }
  }
}

/** The landmarks without those of a kind. */
export function withoutLandmarks(landmarks: Landmarks, kind: LandmarkKind): Landmarks {
  const { annulus, commissures, muscleHeads, ...rest } = landmarks;
  const heads = (muscleHeads ?? []).filter((head) => head.muscle !== kind);
  return {
    ...rest,
    ...(kind === "annulus" || annulus === undefined ? {} : { annulus }),
    ...(kind === "commissure" || commissures === undefined ? {} : { commissures }),
    ...(heads.length === 0 ? {} : { muscleHeads: heads }),
  };
}

export async function addLandmark(model: DeskModel, kind: LandmarkKind, at: PointMm): Promise<void> {
  await keep(model, withLandmark(model.specimen.value.landmarks, kind, at));
}

export async function removeLandmarks(model: DeskModel, kind: LandmarkKind): Promise<void> {
  await keep(model, withoutLandmarks(model.specimen.value.landmarks, kind));
}

/** Landmarks belong to the specimen: every pass on it stands on the same axes. */
async function keep(model: DeskModel, landmarks: Landmarks): Promise<void> {
  try {
    model.specimen.value = await model.services.client.changeSpecimen(model.specimen.value.id, { landmarks });
    model.section.showPlane(model.section.planeName.value);
  } catch (error) {
    model.services.notices.failed(error);
  }
}
