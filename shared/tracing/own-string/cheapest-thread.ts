/** Cost of a sideways step of one sample between two planes, beside what the places cost: strings run on, they do not jump. */
const SIDEWAYS = 0.06;
/** Cost of a place on the clearest string, and what is added where there is none. */
const ON_STRING = 0.03;
const OFF_STRING = 0.97;
/** Answers above this multiple of `halfway` do not get cheaper: a stronger neighbour attracts no more than the own string. */
const ENOUGH = 1.6;

/**
 * The cheapest way through the planes of a straightened volume, from the middle of the first to the middle of the last, shape
 * [count], the place in each plane (v side + u). From plane to plane it moves by at most one sample in u and v. All ways pass
 * the same number of planes, so none is a shortcut; between two strings lie places that cost some thirty times a string's.
 * @param ridge shape [count, side, side]; answers of `planeRidge`. @param halfway the answer at which a place costs a fifth of one off every string.
 * @source Bellman 1957 (dynamic programming over stages).
 */
export function cheapestThread(ridge: Float64Array, count: number, side: number, halfway: number): Int32Array {
  const plane = side * side;
  // States with a border that nothing passes.
  const wide = side + 2;
  const from = new Uint8Array(count * plane);
  let now = new Float64Array(wide * wide).fill(Number.POSITIVE_INFINITY);
  let next = now.slice();
  const half = side >> 1;
  now[(half + 1) * wide + half + 1] = 0;
  const moves = Array.from({ length: 9 }, (_, code) => {
    const [u, v] = [(code % 3) - 1, Math.floor(code / 3) - 1];
    return { inStates: v * wide + u, inPlane: v * side + u, cost: SIDEWAYS * (u * u + v * v) };
  });
  // Of equal ways the straight one.
  moves.unshift(...moves.splice(4, 1));
  for (let i = 1; i < count; i++) {
    for (let v = 0; v < side; v++)
      for (let u = 0; u < side; u++) {
        const state = (v + 1) * wide + u + 1;
        let best = Number.POSITIVE_INFINITY;
        let code = 0;
        for (let m = 0; m < 9; m++) {
          const { inStates, cost } = moves[m]!;
          const candidate = now[state + inStates]! + cost;
          if (candidate < best) {
            best = candidate;
            code = m;
          }
        }
        const o = i * plane + v * side + u;
        const ratio = Math.min(ENOUGH, ridge[o]! / halfway) ** 2;
        next[state] = best + ON_STRING + OFF_STRING / (1 + 4 * ratio * ratio);
        from[o] = code;
      }
    [now, next] = [next, now];
  }
  const thread = new Int32Array(count);
  let at = half * side + half;
  for (let i = count - 1; i >= 0; i--) {
    thread[i] = at;
    if (i > 0) at += moves[from[i * plane + at]!]!.inPlane;
  }
  return thread;
}
