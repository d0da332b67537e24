/** What the profile beside the strip shows. */
export interface RadiusProfile {
  /** Runs of neighbouring measured points: arc length and radius, millimetres. */
  readonly runs: readonly { readonly at: readonly number[]; readonly radii: readonly number[] }[];
  /** Stretches without a radius (below resolution): arc lengths from the last measured point before to the first after. */
  readonly gaps: readonly (readonly [number, number])[];
  /** Right end of the radius axis, a round number of millimetres not below the largest radius. */
  readonly fullMm: number;
}

/** @param at shape [n], ascending, millimetres. @param radii shape [n], millimetres, NaN = below resolution. */
export function radiusProfile(at: ArrayLike<number>, radii: ArrayLike<number>): RadiusProfile {
  const runs: { at: number[]; radii: number[] }[] = [];
  const gaps: [number, number][] = [];
  let largest = 0;
  let open = false;
  for (let i = 0; i < at.length; i++) {
    const radius = radii[i]!;
    if (Number.isNaN(radius)) {
      if (open || i === 0) gaps.push([at[Math.max(0, i - 1)]!, at[i]!]);
      else gaps[gaps.length - 1]![1] = at[i]!;
      open = false;
      continue;
    }
    if (!open) {
      if (i > 0) gaps[gaps.length - 1]![1] = at[i]!;
      runs.push({ at: [], radii: [] });
      open = true;
    }
    const run = runs[runs.length - 1]!;
    run.at.push(at[i]!);
    run.radii.push(radius);
    largest = Math.max(largest, radius);
  }
  return { runs, gaps, fullMm: roundUp(largest) };
}

function roundUp(mm: number): number {
  if (!(mm > 0)) return 0.5;
  const ten = 10 ** Math.floor(Math.log10(mm));
  const full = [1, 1.5, 2, 3, 5, 8, 10].map((k) => k * ten).find((k) => k >= mm * (1 - 1e-9)) ?? 10 * ten;
  return Number(full.toPrecision(6));
}
