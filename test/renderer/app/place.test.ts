import { describe, expect, it } from "vitest";
import { fragmentOf, type Place, placeOf } from "#renderer/app/place.ts";

describe("places in the address", () => {
  it("come back from their fragment", () => {
    const places: Place[] = [
      { screen: "shelf" },
      { screen: "shelf", handBack: "a1" },
      { screen: "desk", specimen: "a b/c", pass: "p#1" },
      { screen: "side-by-side", specimen: "a", a: "p#1", b: "file~x y.json" },
      { screen: "study", study: "s/1", part: "report" },
    ];
    for (const place of places) expect(placeOf(fragmentOf(place))).toEqual(place);
  });

  it("name the passes of a study when they name no part", () => {
    expect(placeOf("#/study/s1")).toEqual({ screen: "study", study: "s1", part: "passes" });
  });

  it("are the shelf for anything else", () => {
    for (const fragment of [
      "",
      "#",
      "#/desk/only",
      "#/desk/a/b/c",
      "#/desk/%/b",
      "#/desk//b",
      "#/side-by-side/a/b",
      "#/side-by-side/a/b/c/d",
      "#/study",
      "#/shelf/hand-back",
      "#/shelf/hand-back/",
      "#/study/",
      "#/study/s1/other",
      "#/study/s1/report/more",
    ])
      expect(placeOf(fragment)).toEqual({ screen: "shelf" });
  });
});
