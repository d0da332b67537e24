/** Values of a front that was let grow to its end, or to a target. */
export interface PlainFront {
  /** shape [nz, ny, nx]; meaningless where `mark` is 0. */
  readonly distance: Float64Array;
  /** shape [nz, ny, nx]; as a front's own. */
  readonly mark: Uint8Array;
  readonly settled: number;
}

type Triple = readonly [number, number, number];

/** The steps to the neighbours with codes 1 to 26. */
const STEPS = Array.from(
  { length: 27 },
  (_, n): Triple => [(n % 3) - 1, (Math.floor(n / 3) % 3) - 1, Math.floor(n / 9) - 1],
).filter((step) => step.some((each) => each !== 0));

/**
 * A front by the compiled one's own steps, one neighbour at a time, with buckets that are plain stacks: what it gives must be the
 * same to the last bit. It knows nothing of memory, chunks, rows or borders.
 * @param goal voxel that the order leans to, or -1.
 */
export function plainFront(
  {
    size,
    spacing,
    cost,
    leastCost,
    mostCost,
  }: { size: Triple; spacing: Triple; cost: Float32Array; leastCost: number; mostCost: number },
  source: number,
  goal = -1,
  target = -1,
): PlainFront {
  const [nx, ny, nz] = size;
  const share = goal < 0 ? 0 : 0.9;
  const width = (1 - share) * leastCost * Math.min(...spacing) * 0.999;
  const ring = Math.ceil(((mostCost + share * leastCost) * Math.hypot(...spacing)) / width) + 3;
  const buckets: number[][] = Array.from({ length: ring }, () => []);
  const place = (v: number): Triple => [v % nx, Math.floor(v / nx) % ny, Math.floor(v / (nx * ny))];
  const toMm = (a: Triple, b: Triple): Triple => [
    (a[0] - b[0]) * spacing[0],
    (a[1] - b[1]) * spacing[1],
    (a[2] - b[2]) * spacing[2],
  ];
  const apart = goal < 0 ? 0 : Math.hypot(...toMm(place(source), place(goal)));
  const way = (a: Triple, b: Triple) => {
    const [x, y, z] = toMm(a, b);
    return Math.sqrt(x * x + y * y + z * z);
  };
  const keyOf = (d: number, at: Triple) => {
    if (goal < 0) return d;
    const perMm = 0.9 * leastCost * 0.999;
    return Math.max(0, d + (perMm / 2) * (way(at, place(goal)) - way(at, place(source)) - apart));
  };
  const distance = new Float64Array(nx * ny * nz);
  const mark = new Uint8Array(nx * ny * nz);
  mark[source] = 27;
  buckets[0]!.push(source);
  let settled = 0;
  let waiting = 1;
  for (let current = 0; waiting > 0; ) {
    const v = buckets[current % ring]!.pop();
    if (v === undefined) {
      current++;
      continue;
    }
    waiting--;
    if (mark[v]! >= 32) continue;
    mark[v] = mark[v]! | 32;
    settled++;
    const [x, y, z] = place(v);
    STEPS.forEach(([dx, dy, dz], code) => {
      const at: Triple = [x + dx, y + dy, z + dz];
      if (at[0] < 0 || at[1] < 0 || at[2] < 0 || at[0] >= nx || at[1] >= ny || at[2] >= nz) return;
      const u = at[0] + nx * (at[1] + ny * at[2]);
      const half = Math.hypot(...toMm([dx, dy, dz], [0, 0, 0])) / 2;
      const candidate = distance[v]! + (cost[v]! + cost[u]!) * half;
      if (mark[u]! >= 32 || !(candidate < (mark[u] === 0 ? Number.POSITIVE_INFINITY : distance[u]!))) return;
      distance[u] = candidate;
      mark[u] = code + 1;
      buckets[Math.floor(keyOf(candidate, at) * (1 / width)) % ring]!.push(u);
      waiting++;
    });
    if (v === target) break;
  }
  return { distance, mark, settled };
}
