import { describe, expect, it } from "vitest";
import { landmarkCount, withLandmark, withoutLandmarks } from "#renderer/desk/model/landmarks.ts";
import { pointMm } from "#shared/geometry/types.ts";
import { valveAxes } from "#shared/geometry/valve-axes.ts";

const bottom = pointMm(0, 0, 0);
const top = pointMm(0, 0, 20);

describe("landmarks", () => {
  it("number the heads of each muscle on their own, in the order in which they are set", () => {
    let landmarks = withLandmark({}, "antero-lateral", bottom);
    landmarks = withLandmark(landmarks, "postero-medial", bottom);
    landmarks = withLandmark(landmarks, "antero-lateral", bottom);
    expect(landmarks.muscleHeads?.map(({ muscle, head }) => `${muscle} ${head}`)).toEqual([
      "antero-lateral 1",
      "postero-medial 1",
      "antero-lateral 2",
    ]);
  });

  it("stand the valve upright with one head and one place of the annulus", () => {
    const landmarks = withLandmark(withLandmark({}, "antero-lateral", bottom), "annulus", top);
    expect(valveAxes(landmarks)?.up).toEqual([0, 0, 1]);
  });

  it("are taken away by kind, the others kept", () => {
    const all = withLandmark(withLandmark(withLandmark({}, "antero-lateral", bottom), "annulus", top), "commissure", top);
    const less = withoutLandmarks(all, "annulus");
    expect(landmarkCount(less, "annulus")).toBe(0);
    expect(landmarkCount(less, "antero-lateral")).toBe(1);
    expect(landmarkCount(less, "commissure")).toBe(1);
    expect(withoutLandmarks(less, "antero-lateral").muscleHeads).toBeUndefined();
  });
});
