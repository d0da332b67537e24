import { describe, expect, it } from "vitest";
import { afterLabelling, FIRST_STICKY, stickyEndLabels } from "#renderer/editor/session/sticky-labels.ts";

const sticky = { ...FIRST_STICKY, leaflet: "anterior", segment: "A2", zone: "rough" } as const;

describe("sticky labels", () => {
  it("go on an insertion, where nothing is inherited", () => {
    expect(stickyEndLabels(sticky, "insertion", {})).toEqual({ leaflet: "anterior", segment: "A2", zone: "rough" });
    expect(stickyEndLabels(sticky, "insertion", { zone: "base" })).toEqual({ leaflet: "anterior", segment: "A2" });
  });

  it("do not put a segment on another leaflet than the inherited one", () => {
    expect(stickyEndLabels(sticky, "insertion", { leaflet: "posterior" })).toEqual({ zone: "rough" });
  });

  it("go on no other kind of end", () => {
    expect(stickyEndLabels(sticky, "ruptured", {})).toEqual({});
  });

  it("follow what was labelled by hand; a segment brings its leaflet, another leaflet takes the segment away", () => {
    expect(afterLabelling(FIRST_STICKY, { segment: "PC" })).toMatchObject({ leaflet: "commissure", segment: "PC" });
    expect(afterLabelling(sticky, { leaflet: "posterior" })).toMatchObject({ leaflet: "posterior", segment: null });
    expect(afterLabelling(sticky, { muscle: "postero-medial", head: 2 })).toMatchObject({
      muscle: "postero-medial",
      head: 2,
      segment: "A2",
    });
  });
});
