/** A bar of a round length: 1, 2 or 5 times a power of ten millimetres. */
export interface ScaleBar {
  readonly mm: number;
  readonly px: number;
  readonly text: string;
}

/** The longest round bar that is not wider than `maxPx`. @param mmPerPx > 0 */
export function scaleBar(mmPerPx: number, maxPx: number): ScaleBar {
  const most = maxPx * mmPerPx;
  const power = Math.floor(Math.log10(most) + 1e-9);
  const ten = 10 ** power;
  const mm = [5, 2, 1].map((k) => k * ten).find((length) => length <= most * (1 + 1e-9)) ?? ten;
  // toPrecision takes the binary tail off lengths like 0.30000000000000004.
  const round = Number(mm.toPrecision(1));
  return { mm: round, px: round / mmPerPx, text: `${round} mm` };
}

/** A length for reading off a picture: three significant places of a millimetre where it is short. */
export function lengthText(mm: number): string {
  const digits = Math.abs(mm) < 1 ? 3 : Math.abs(mm) < 100 ? 2 : 1;
  return `${mm.toFixed(digits)} mm`;
}

/** A depth with its side: behind the plane is positive. */
export function depthText(mm: number): string {
  const rounded = Math.round(mm * 100) / 100;
  if (rounded === 0) return "on the plane";
  return rounded > 0 ? `${rounded.toFixed(2)} mm behind` : `${(-rounded).toFixed(2)} mm before`;
}
