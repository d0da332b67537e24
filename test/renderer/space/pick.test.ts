import { Matrix4, PerspectiveCamera, Vector3 } from "three";
import { expect, test } from "vitest";
import { type Pickable, pickInSpace } from "#renderer/space/pick.ts";
import { pointMm } from "#shared/geometry/types.ts";
import type { DrawnStrand } from "#shared/marks/drawn-strand.ts";
import type { TreeNode } from "#shared/trees/document.ts";

// three's own camera is the independent projection here.
const camera = new PerspectiveCamera(24, 1.5, 1, 500);
camera.position.set(3, -80, 12);
camera.up.set(0, 0, 1);
camera.lookAt(0, 0, 0);
camera.updateMatrixWorld();
const matrix = new Matrix4().multiplyMatrices(camera.projectionMatrix, camera.matrixWorldInverse).elements;
const projection = { matrix, width: 600, height: 400 };

function pixelOf(x: number, y: number, z: number): [number, number] {
  const p = new Vector3(x, y, z).project(camera);
  return [((p.x + 1) / 2) * 600, ((1 - p.y) / 2) * 400];
}

const strand = (id: `s${number}`, points: number[]): DrawnStrand => ({
  id,
  tree: "t1",
  name: "ALPM-01",
  points: Float64Array.from(points),
  radii: new Float64Array(points.length / 3),
  pins: [],
  mark: { colour: 0, dash: 0 },
  doubtful: false,
  traced: true,
});
const node: TreeNode = { id: "n1", tree: "t1", kind: "fork", position: pointMm(0, 0, 5) };
const what: Pickable = {
  strands: [strand("s1", [0, 0, -5, 0, 0, 5]), strand("s2", [0.2, 6, -5, 0.2, 6, 5])],
  nodes: [node],
  surface: Float32Array.of(6, 0, 0, 6, 10, 0),
};

test("a strand is found where three's camera shows it, with its place along it", () => {
  const [x, y] = pixelOf(0, 0, 0);
  const hit = pickInSpace(what, projection, x + 3, y);
  expect(hit).toMatchObject({ kind: "strand", id: "s1" });
  if (hit?.kind !== "strand") return;
  // Perspective shortens the far half a little: the place is interpolated on screen.
  expect(Math.abs(hit.atMm - 5)).toBeLessThan(0.4);
});

test("of two strands on the same pixel the one in front is taken, whatever their order", () => {
  const front = strand("s3", [0, -10, -5, 0, -10, 5]);
  const [x, y] = pixelOf(0, -10, 0);
  const back = strand("s4", [...new Float64Array(6)]);
  const far = new Vector3(0, -10, 0).sub(camera.position).multiplyScalar(1.2).add(camera.position);
  back.points.set([far.x, far.y, far.z - 5, far.x, far.y, far.z + 5]);
  for (const strands of [
    [front, back],
    [back, front],
  ]) {
    expect(pickInSpace({ strands, nodes: [], surface: null }, projection, x, y)).toMatchObject({ id: "s3" });
  }
});

test("a node comes before a strand, and the surface last, nearest point first", () => {
  expect(pickInSpace(what, projection, ...pixelOf(0, 0, 5))).toMatchObject({ kind: "node", id: "n1" });
  const hit = pickInSpace(what, projection, ...pixelOf(6, 0, 0));
  expect(hit).toMatchObject({ kind: "surface" });
  expect([...hit!.point]).toEqual([6, 0, 0]);
});

test("nothing is found beside everything, nor behind the viewer", () => {
  expect(pickInSpace(what, projection, 20, 20)).toBeNull();
  const behind = { ...node, position: pointMm(3, -90, 12) };
  expect(pickInSpace({ strands: [], nodes: [behind], surface: null }, projection, 300, 200)).toBeNull();
});
