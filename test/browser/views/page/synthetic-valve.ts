import type { PlaneMm } from "#shared/api/engine.ts";
import { type PointMm, pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { add, cross, dot, norm, normalise, scale, subtract } from "#shared/geometry/vec3.ts";
import type { Curve, NodeKind, Strand, Tree, TreeDocument, TreeNode } from "#shared/trees/document.ts";
import { emptyDocument } from "#shared/trees/document.ts";

/** A few made-up trees with every kind of node, in a box of 20 x 20 x 20 mm, z up. */
export function syntheticTrees(count: number): TreeDocument {
  const trees = new Map<Tree["id"], Tree>();
  const nodes = new Map<TreeNode["id"], TreeNode>();
  const strands = new Map<Strand["id"], Strand>();
  const curves = new Map<Curve["id"], Curve>();
  const ends: NodeKind[] = [
    "insertion",
    "muscle-end",
    "wall-end",
    "ruptured",
    "cut",
    "lost-end",
    "scan-edge",
    "open",
    "waypoint",
  ];
  let n = 0;
  let s = 0;
  for (let t = 0; t < count; t++) {
    const tree: Tree["id"] = `t${t + 1}`;
    const angle = (2 * Math.PI * t) / count;
    const at = (radius: number, z: number, turn = 0): PointMm =>
      pointMm(10 + radius * Math.cos(angle + turn), 10 + radius * Math.sin(angle + turn), z);
    const add = (kind: NodeKind, position: PointMm): TreeNode["id"] => {
      n += 1;
      const id: TreeNode["id"] = `n${n}`;
      nodes.set(id, { id, tree, kind, position, ...(n % 7 === 0 ? { certainty: "doubtful" as const } : {}) });
      return id;
    };
    const join = (from: TreeNode["id"], to: TreeNode["id"], radius: number, traced: boolean) => {
      s += 1;
      const a = nodes.get(from)!.position;
      const b = nodes.get(to)!.position;
      const points: number[] = [];
      const radii: number[] = [];
      for (let k = 0; k <= 60; k++) {
        const f = k / 60;
        const bow = 0.5 * Math.sin(Math.PI * f);
        points.push(a[0] + (b[0] - a[0]) * f + bow, a[1] + (b[1] - a[1]) * f - bow, a[2] + (b[2] - a[2]) * f);
        radii.push(f > 0.55 && f < 0.7 ? Number.NaN : radius * (1 - 0.4 * f));
      }
      const id: Curve["id"] = `c${s}`;
      if (traced) {
        curves.set(id, {
          id,
          points: Float64Array.from(points),
          radii: Float64Array.from(radii),
          madeBy: [[0, 60, "guide"]],
          imageFit: 0.84,
        });
      }
      const via = [pointMm(points[60]!, points[61]!, points[62]!)];
      strands.set(`s${s}`, {
        id: `s${s}`,
        tree,
        from,
        to,
        curve: traced ? id : null,
        via,
        ...(s % 5 === 0 ? { certainty: "doubtful" as const } : {}),
      });
    };
    const root = add("origin", at(4, 2));
    const fork = add("fork", at(5.5, 10));
    join(root, fork, 0.45, true);
    const first = add(ends[t % ends.length]!, at(7.5, 17, 0.18));
    const second = add("insertion", at(7, 18, -0.2));
    join(fork, first, 0.25, true);
    join(fork, second, 0.2, t % 4 !== 3);
    trees.set(tree, { id: tree, name: `ALPM-${String(t + 1).padStart(2, "0")}`, root });
  }
  return { ...emptyDocument(), trees, nodes, strands, curves };
}

/** Grey picture of the trees on a plane: bright strings on a noisy ground (a fixed pattern, no randomness). */
export function greyOf(document: TreeDocument, plane: PlaneMm): Uint8Array {
  const grey = new Uint8Array(plane.width * plane.height);
  const normal = normalise(cross(plane.u, plane.v));
  const [u, v] = [norm(plane.u), norm(plane.v)];
  for (let i = 0; i < grey.length; i++) {
    const x = i % plane.width;
    const y = (i / plane.width) | 0;
    grey[i] = 34 + ((x * 7919 + y * 104729 + ((x * y) % 977)) % 23);
  }
  for (const curve of document.curves.values()) {
    for (let k = 0; k + 2 < curve.points.length; k += 3) {
      const p: Vec3 = [curve.points[k]!, curve.points[k + 1]!, curve.points[k + 2]!];
      const radius = Number.isNaN(curve.radii[k / 3]!) ? 0.12 : curve.radii[k / 3]!;
      const d = subtract(p, plane.origin);
      const depth = dot(d, normal);
      if (Math.abs(depth) > radius) continue;
      const here = Math.sqrt(radius * radius - depth * depth);
      const cx = dot(d, normalise(plane.u)) / u;
      const cy = dot(d, normalise(plane.v)) / v;
      const reach = here / u;
      for (let y = Math.max(0, Math.floor(cy - reach)); y <= Math.min(plane.height - 1, cy + reach); y++)
        for (let x = Math.max(0, Math.floor(cx - reach)); x <= Math.min(plane.width - 1, cx + reach); x++)
          if (Math.hypot(x - cx, y - cy) <= reach) grey[y * plane.width + x] = 190 + ((x + y) % 9);
    }
  }
  return grey;
}

/** Points around the trees, as the engine's surface answer gives them. */
export function surfaceOf(document: TreeDocument): Float32Array {
  const out: number[] = [];
  for (const curve of document.curves.values()) {
    for (let k = 0; k + 2 < curve.points.length; k += 3) {
      for (let a = 0; a < 4; a++) {
        const p = add(
          [curve.points[k]!, curve.points[k + 1]!, curve.points[k + 2]!],
          scale([Math.cos(a * 1.6), Math.sin(a * 1.6), 0], 0.3),
        );
        out.push(...p);
      }
    }
  }
  for (let k = 0; k < 4000; k++) out.push(10 + 9 * Math.cos(k), 10 + 9 * Math.sin(k), 17 + ((k * 37) % 100) / 40);
  return Float32Array.from(out);
}
