import type { Object3D, Points, Scene } from "three";
import { GlyphTextures } from "#renderer/space/glyph-textures.ts";
import {
  freePart,
  guidePart,
  nodesPart,
  pinsPart,
  placesPart,
  planePart,
  proposalPart,
  selectionPart,
  sizeGlyphs,
  strandsPart,
  surfacePart,
} from "#renderer/space/scene-parts.ts";
import type { SpaceContent } from "#renderer/space/space-content.ts";
import type { ViewColours } from "#shared/marks/colours.ts";
import { type DrawnStrand, drawnStrands } from "#shared/marks/drawn-strand.ts";

const PARTS = ["strands", "nodes", "places", "selection", "guide", "proposal", "pins", "plane", "surface"] as const;
type PartName = (typeof PARTS)[number];

/** The parts of the scene by what they show; each is built anew only when what it shows has changed. */
export class SceneStore {
  private readonly glyphs = new GlyphTextures();
  private readonly parts = new Map<PartName, Object3D>();
  private readonly stale = new Set<PartName>();
  private drawn: readonly DrawnStrand[] = [];

  constructor(private readonly scene: Scene) {}

  /** The strands shown, for picking. */
  get strands(): readonly DrawnStrand[] {
    return this.drawn;
  }

  /** Notes which parts are stale; they are built at the next {@link refresh}. */
  changed(before: SpaceContent, now: SpaceContent): void {
    if (now.document !== before.document || now.strands !== before.strands) {
      this.drawn = now.strands ?? (now.document === null ? [] : drawnStrands(now.document));
      this.spoil("strands", "nodes", "selection");
    }
    if (now.selection !== before.selection) this.spoil("selection");
    if (now.places !== before.places) this.spoil("places");
    if (now.guide !== before.guide) this.spoil("guide");
    if (now.proposal !== before.proposal) this.spoil("proposal");
    if (now.pins !== before.pins) this.spoil("pins");
    if (now.plane !== before.plane || now.picture !== before.picture) this.spoil("plane");
    if (now.surface !== before.surface) this.spoil("surface");
  }

  changedColours(): void {
    this.spoil(...PARTS);
  }

  refresh(content: SpaceContent, colours: ViewColours): void {
    for (const name of this.stale) {
      const before = this.parts.get(name);
      if (before !== undefined) {
        this.scene.remove(before);
        freePart(before);
        this.parts.delete(name);
      }
      const part = this.build(name, content, colours);
      if (part === null) continue;
      this.scene.add(part);
      this.parts.set(name, part);
    }
    this.stale.clear();
  }

  /** Glyphs for a scale of the view, and a share (0-1) of the surface points. */
  fitTo(mmPerPx: number, surfaceShare: number): void {
    for (const name of ["nodes", "pins"] as const) {
      const part = this.parts.get(name);
      if (part !== undefined) sizeGlyphs(part, mmPerPx);
    }
    const surface = this.parts.get("surface") as Points | undefined;
    if (surface === undefined) return;
    const { count } = surface.geometry.getAttribute("position");
    surface.geometry.setDrawRange(0, Math.ceil(count * surfaceShare));
  }

  dispose(): void {
    for (const part of this.parts.values()) {
      this.scene.remove(part);
      freePart(part);
    }
    this.parts.clear();
    this.glyphs.dispose();
  }

  private spoil(...names: readonly PartName[]): void {
    for (const name of names) this.stale.add(name);
  }

  private build(name: PartName, content: SpaceContent, colours: ViewColours): Object3D | null {
    const { document, guide, pins, plane, picture, surface, selection } = content;
    switch (name) {
      case "strands":
        return this.drawn.length === 0 ? null : strandsPart(this.drawn, colours);
      case "nodes":
        return document === null ? null : nodesPart(document.nodes.values(), colours, this.glyphs);
      case "selection": {
        const chosen = this.drawn.filter((strand) =>
          strand.picked !== undefined
            ? strand.picked
            : selection.strand === undefined
              ? selection.tree !== undefined && strand.tree === selection.tree
              : strand.id === selection.strand,
        );
        return chosen.length === 0 ? null : selectionPart(chosen, colours);
      }
      case "places":
        return content.places.length === 0 ? null : placesPart(content.places, colours, this.glyphs);
      case "guide":
        return guide === null || guide.length < 6 ? null : guidePart(guide, colours);
      case "proposal":
        return content.proposal.length === 0 ? null : proposalPart(content.proposal, colours);
      case "pins":
        return pins.length === 0 ? null : pinsPart(pins, colours, this.glyphs);
      case "plane":
        return plane === null ? null : planePart(plane, picture, colours);
      case "surface":
        return surface === null ? null : surfacePart(surface, colours);
    }
  }
}
