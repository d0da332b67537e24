import { CanvasTexture, SRGBColorSpace, type Texture } from "three";
import { NODE_GLYPHS, type NodeGlyph } from "#shared/marks/node-glyph.ts";
import type { NodeKind } from "#shared/trees/document.ts";

const SIDE_PX = 64;

/** White glyphs with a dark rim, one texture a glyph, made when first asked for; a vertex colour tints them. */
export class GlyphTextures {
  private readonly made = new Map<NodeGlyph, Texture>();

  of(kind: NodeKind): Texture {
    return this.ofGlyph(NODE_GLYPHS[kind]);
  }

  ofGlyph(glyph: NodeGlyph): Texture {
    let texture = this.made.get(glyph);
    if (texture === undefined) {
      texture = draw(glyph);
      this.made.set(glyph, texture);
    }
    return texture;
  }

  dispose(): void {
    for (const texture of this.made.values()) texture.dispose();
    this.made.clear();
  }
}

function draw({ fill, stroke }: NodeGlyph): Texture {
  const canvas = document.createElement("canvas");
  canvas.width = canvas.height = SIDE_PX;
  const to = canvas.getContext("2d")!;
  to.translate(SIDE_PX / 2, SIDE_PX / 2);
  to.scale(SIDE_PX / 28, SIDE_PX / 28);
  to.lineJoin = "round";
  to.lineCap = "round";
  const full = new Path2D(fill);
  const line = new Path2D(stroke);
  to.strokeStyle = "#000";
  to.lineWidth = 4;
  to.stroke(full);
  to.lineWidth = 6.4;
  to.stroke(line);
  to.fillStyle = "#fff";
  to.fill(full);
  to.strokeStyle = "#fff";
  to.lineWidth = 2.8;
  to.stroke(line);
  const texture = new CanvasTexture(canvas);
  texture.colorSpace = SRGBColorSpace;
  return texture;
}
