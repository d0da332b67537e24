import { describe, expect, it } from "vitest";
import { fragmentOf, type Place, placeOf } from "#renderer/app/place.ts";

describe("places in the address", () => {
  it("come back from their fragment", () => {
    const places: Place[] = [{ screen: "shelf" }, { screen: "desk", specimen: "a b/c", pass: "p#1" }];
    for (const place of places) expect(placeOf(fragmentOf(place))).toEqual(place);
  });

  it("are the shelf for anything else", () => {
    for (const fragment of ["", "#", "#/desk/only", "#/desk/a/b/c", "#/desk/%/b"])
      expect(placeOf(fragment)).toEqual({ screen: "shelf" });
  });
});
