import {
  BufferAttribute,
  BufferGeometry,
  CanvasTexture,
  Color,
  DoubleSide,
  Group,
  Line,
  LineBasicMaterial,
  LineLoop,
  Mesh,
  MeshBasicMaterial,
  MeshLambertMaterial,
  type Object3D,
  Points,
  PointsMaterial,
  SRGBColorSpace,
} from "three";
import type { GlyphTextures } from "#renderer/space/glyph-textures.ts";
import type { PictureInSpace, PlaneInSpace, SpaceContent } from "#renderer/space/space-content.ts";
import { type Tube, tubeMesh } from "#renderer/space/tube-mesh.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { add, scale } from "#shared/geometry/vec3.ts";
import type { ViewColours } from "#shared/marks/colours.ts";
import type { DrawnStrand } from "#shared/marks/drawn-strand.ts";
import type { MarkedPlace } from "#shared/marks/marked-place.ts";
import type { ProposedLine } from "#shared/marks/proposed-line.ts";
import { TREE_DASHES, treeMark } from "#shared/marks/tree-mark.ts";
import type { NodeKind, TreeNode } from "#shared/trees/document.ts";

/** Strands thinner than this would vanish at the distance from which a whole valve is seen. */
const THINNEST_MM = 0.11;
/** Radii of quiet and of loud strands, whatever they measure: they are lines to be told apart, not the strings themselves. */
const QUIET_MM = 0.06;
const LOUD_MM = 0.17;
/** Rings of a tube stand this far apart. */
const STEP_MM = 0.25;
const DASH_UNIT_MM = 0.32;
/** Side of a glyph in CSS pixels (three multiplies point sizes by the pixel ratio): it follows the zoom between these bounds. */
const GLYPH_PX = { least: 8, most: 17 } as const;
const GLYPH_MM = 1.1;
/** Sides of the glyphs of marked places, CSS pixels. */
const PLACE_PX = { plain: 18, picked: 30 } as const;

/** Frees what a part holds on the graphics side. */
export function freePart(part: Object3D): void {
  part.traverse((object) => {
    if (!(object instanceof Mesh || object instanceof Line || object instanceof Points)) return;
    object.geometry.dispose();
    for (const material of Array.isArray(object.material) ? object.material : [object.material]) {
      if (material instanceof MeshBasicMaterial) material.map?.dispose();
      material.dispose();
    }
  });
}

/** All strands as one mesh of tubes; doubtful ones thin. Widths are the measured ones where there are any. */
export function strandsPart(strands: readonly DrawnStrand[], colours: ViewColours): Object3D {
  return tubesPart(
    strands.map((strand) => ({
      points: strand.points,
      radii: radiiInSpace(strand),
      colour: strand.manner === "quiet" ? quietRgb(colours) : rgb(colours.trees[strand.mark.colour]!),
      dashMm: TREE_DASHES[strand.mark.dash]!.map((k) => k * DASH_UNIT_MM),
    })),
    strands.some((strand) => strand.manner === "quiet") ? QUIET_MM : THINNEST_MM,
  );
}

function radiiInSpace({ radii, doubtful, traced, manner }: DrawnStrand): ArrayLike<number> {
  if (manner === "quiet") return [];
  if (manner === "loud") return radii.map(() => LOUD_MM);
  return doubtful || !traced ? [] : radii;
}

/** A hull stands off what is drawn by as much for every strand. */
function hullRadii({ radii, manner }: DrawnStrand): ArrayLike<number> {
  const drawn = (radius: number) =>
    manner === "quiet" ? QUIET_MM : manner === "loud" ? LOUD_MM : Number.isNaN(radius) ? 0 : radius;
  return radii.map((radius) => drawn(radius) + 0.18);
}

function quietRgb(colours: ViewColours): [number, number, number] {
  const { r, g, b } = new Color(colours.ink).lerp(new Color(colours.pane), 0.55);
  return [r, g, b];
}

/** A translucent hull around the selected strands. */
export function selectionPart(strands: readonly DrawnStrand[], colours: ViewColours): Object3D {
  const hull = strands.map((strand) => ({
    points: strand.points,
    radii: hullRadii(strand),
    colour: rgb(colours.accent),
    dashMm: [],
  }));
  const mesh = tubesPart(hull, THINNEST_MM + 0.18) as Mesh<BufferGeometry, MeshLambertMaterial>;
  mesh.material.transparent = true;
  mesh.material.opacity = 0.5;
  mesh.material.depthWrite = false;
  return mesh;
}

export function guidePart(points: readonly number[], colours: ViewColours): Object3D {
  return tubesPart([{ points, radii: [], colour: rgb(colours.accent), dashMm: [] }], THINNEST_MM);
}

/** A proposal as dashed lines; what is left out is thin and quiet. */
export function proposalPart(lines: readonly ProposedLine[], colours: ViewColours): Object3D {
  const tubes = lines
    .filter(({ points }) => points.length >= 6)
    .map(({ points, kept }) => ({
      points,
      radii: [],
      colour: kept ? rgb(colours.accent) : quietRgb(colours),
      dashMm: kept ? [1, 0.6] : [0.3, 0.6],
    }));
  return tubesPart(tubes, THINNEST_MM);
}

function tubesPart(tubes: readonly Tube[], thinnestMm: number): Mesh {
  const mesh = tubeMesh(tubes, thinnestMm, STEP_MM);
  const geometry = new BufferGeometry();
  geometry.setAttribute("position", new BufferAttribute(mesh.positions, 3));
  geometry.setAttribute("normal", new BufferAttribute(mesh.normals, 3));
  geometry.setAttribute("color", new BufferAttribute(mesh.colours, 3));
  geometry.setIndex(new BufferAttribute(mesh.indices, 1));
  return new Mesh(geometry, new MeshLambertMaterial({ vertexColors: true, side: DoubleSide }));
}

/** Nodes as glyphs of constant size on screen, one draw a kind. */
export function nodesPart(nodes: Iterable<TreeNode>, colours: ViewColours, textures: GlyphTextures): Object3D {
  const byKind = new Map<NodeKind, TreeNode[]>();
  for (const node of nodes) {
    const same = byKind.get(node.kind);
    if (same === undefined) byKind.set(node.kind, [node]);
    else same.push(node);
  }
  const group = new Group();
  for (const [kind, same] of byKind) {
    const geometry = new BufferGeometry();
    geometry.setAttribute("position", new BufferAttribute(Float32Array.from(same.flatMap((node) => [...node.position])), 3));
    const tints = same.flatMap((node) => rgb(kind === "open" ? colours.warn : colours.trees[treeMark(node.tree).colour]!));
    geometry.setAttribute("color", new BufferAttribute(Float32Array.from(tints), 3));
    group.add(
      new Points(
        geometry,
        new PointsMaterial({
          map: textures.of(kind),
          vertexColors: true,
          size: GLYPH_PX.most,
          sizeAttenuation: false,
          alphaTest: 0.35,
          transparent: true,
        }),
      ),
    );
  }
  return group;
}

/** The section's plane: a thin frame with a tint, or the picture itself. */
export function planePart(plane: PlaneInSpace, picture: PictureInSpace | null, colours: ViewColours): Object3D {
  const group = new Group();
  const corners = cornersOf(plane);
  const sheet = sheetOf(picture === null ? corners : cornersOf(picture));
  const material =
    picture === null
      ? new MeshBasicMaterial({ color: colours.accent, transparent: true, opacity: 0.08, side: DoubleSide, depthWrite: false })
      : new MeshBasicMaterial({ map: pictureTexture(picture), transparent: true, opacity: 0.9, side: DoubleSide });
  group.add(new Mesh(sheet, material));
  const edge = new BufferGeometry();
  edge.setAttribute("position", new BufferAttribute(Float32Array.from(corners.flat()), 3));
  group.add(new LineLoop(edge, new LineBasicMaterial({ color: colours.accent })));
  return group;
}

/** Sets the size of a part's glyphs for a scale of the view. */
export function sizeGlyphs(part: Object3D, mmPerPx: number): void {
  part.traverse((object) => {
    if (!(object instanceof Points) || !(object.material instanceof PointsMaterial)) return;
    object.material.size = Math.min(GLYPH_PX.most, Math.max(GLYPH_PX.least, GLYPH_MM / mmPerPx));
  });
}

export function surfacePart(points: Float32Array, colours: ViewColours): Points {
  const geometry = new BufferGeometry();
  geometry.setAttribute("position", new BufferAttribute(points, 3));
  const material = new PointsMaterial({
    color: new Color(colours.ink),
    size: 1.5,
    sizeAttenuation: false,
    transparent: true,
    opacity: 0.28,
    depthWrite: false,
  });
  return new Points(geometry, material);
}

/** Marked places as glyphs of constant size before everything else, the one looked at larger. */
export function placesPart(places: readonly MarkedPlace[], colours: ViewColours, textures: GlyphTextures): Object3D {
  const group = new Group();
  for (const { at, glyph, colour, picked } of places) {
    const geometry = new BufferGeometry();
    geometry.setAttribute("position", new BufferAttribute(Float32Array.from(at), 3));
    const material = new PointsMaterial({
      map: textures.ofGlyph(glyph),
      color: picked ? colours.accent : colour === null ? colours.ink : colours.trees[colour]!,
      size: picked ? PLACE_PX.picked : PLACE_PX.plain,
      sizeAttenuation: false,
      alphaTest: 0.35,
      transparent: true,
      depthTest: false,
      fog: false,
    });
    const points = new Points(geometry, material);
    points.renderOrder = picked ? 2 : 1;
    group.add(points);
  }
  return group;
}

/** Pins of the strand under way. */
export function pinsPart(pins: SpaceContent["pins"], colours: ViewColours, textures: GlyphTextures): Object3D {
  const geometry = new BufferGeometry();
  geometry.setAttribute("position", new BufferAttribute(Float32Array.from(pins.flat()), 3));
  const map = textures.of("waypoint");
  return new Points(
    geometry,
    new PointsMaterial({
      map,
      color: colours.accent,
      size: GLYPH_PX.most,
      sizeAttenuation: false,
      alphaTest: 0.35,
      transparent: true,
    }),
  );
}

function cornersOf(plane: PlaneInSpace): Vec3[] {
  const right = scale(plane.right, plane.widthMm / 2);
  const down = scale(plane.down, plane.heightMm / 2);
  const corner = (x: number, y: number) => add(plane.centre, add(scale(right, x), scale(down, y)));
  return [corner(-1, -1), corner(1, -1), corner(1, 1), corner(-1, 1)];
}

function sheetOf(corners: readonly Vec3[]): BufferGeometry {
  const geometry = new BufferGeometry();
  geometry.setAttribute("position", new BufferAttribute(Float32Array.from(corners.flat()), 3));
  geometry.setAttribute("uv", new BufferAttribute(Float32Array.from([0, 1, 1, 1, 1, 0, 0, 0]), 2));
  geometry.setIndex([0, 3, 1, 1, 3, 2]);
  return geometry;
}

function pictureTexture(picture: PictureInSpace): CanvasTexture {
  const canvas = document.createElement("canvas");
  canvas.width = picture.width;
  canvas.height = picture.height;
  const to = canvas.getContext("2d")!;
  const pixels = to.createImageData(picture.width, picture.height);
  const words = new Uint32Array(pixels.data.buffer);
  for (let i = 0; i < words.length; i++) words[i] = (picture.grey[i]! * 0x010101) | 0xff000000;
  to.putImageData(pixels, 0, 0);
  const texture = new CanvasTexture(canvas);
  texture.colorSpace = SRGBColorSpace;
  return texture;
}

function rgb(colour: string): [number, number, number] {
  const { r, g, b } = new Color(colour);
  return [r, g, b];
}
