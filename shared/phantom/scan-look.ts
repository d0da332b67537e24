import type { SpecimenFacts } from "#shared/api/specimen.ts";
import type { ScanLook } from "#shared/phantom/render-scan.ts";

/** What is said of every synthetic specimen. */
export const PHANTOM_FACTS: SpecimenFacts = {
  species: "porcine",
  fixation: "fixed under load (synthetic)",
  medium: "none (synthetic)",
  pressure: 100,
  state: "closed",
};

/** Grey values of a phantom; `noise` is its standard deviation as a share of a string's contrast; `oneGrain`: see {@link ScanLook}. */
export function lookOf(seed: number, noise: number, blurFwhmMm: number, oneGrain = false): ScanLook {
  const contrast = { string: 24000, muscle: 19500, leaflet: 17500 };
  return { seed, background: 9000, contrast, noise: noise * contrast.string, blurFwhmMm, ring: 420, fibre: 0.07, oneGrain };
}
