/** True when the person asked the system for less motion: then nothing plays by itself. */
export function likesStillness(): boolean {
  return matchMedia("(prefers-reduced-motion: reduce)").matches;
}
