import { ChoiceRow } from "#renderer/desk/side/choice-row.tsx";
import type { Leaflet, Muscle, OriginSite, Segment, Zone } from "#shared/trees/document.ts";
import type { NodeLabels } from "#shared/trees/edits/node-labels.ts";

const LEAFLETS: readonly (readonly [Leaflet, string])[] = [
  ["anterior", "anterior"],
  ["posterior", "posterior"],
  ["commissure", "commissure"],
];
const SEGMENTS: Readonly<Record<Leaflet, readonly (readonly [Segment, string])[]>> = {
  anterior: [
    ["A1", "A1"],
    ["A2", "A2"],
    ["A3", "A3"],
  ],
  posterior: [
    ["P1", "P1"],
    ["P2", "P2"],
    ["P3", "P3"],
  ],
  commissure: [
    ["AC", "AC"],
    ["PC", "PC"],
  ],
};
const ZONES: readonly (readonly [Zone, string])[] = [
  ["free-edge", "free edge"],
  ["rough", "rough"],
  ["base", "base"],
];
const SITES: readonly (readonly [OriginSite, string])[] = [
  ["head", "head"],
  ["wall", "wall"],
  ["unseen", "unseen"],
  ["scan-edge", "edge"],
];
const MUSCLES: readonly (readonly [Muscle, string])[] = [
  ["antero-lateral", "antero-lateral"],
  ["postero-medial", "postero-medial"],
];
const HEADS = [1, 2, 3, 4, 5, 6].map((head) => [head, String(head)] as const);

type Values = { readonly [Key in keyof NodeLabels]?: NodeLabels[Key] };

export interface AxesProps {
  readonly values: Values;
  readonly set: (labels: NodeLabels) => void;
  readonly disabled: boolean;
}

/** Leaflet, segment and zone; segments of the chosen leaflet only, all of them while none is chosen. */
export function PlaceAxes({ values, set, disabled }: AxesProps) {
  const segments = values.leaflet ? SEGMENTS[values.leaflet] : Object.values(SEGMENTS).flat();
  const setLeaflet = (leaflet: Leaflet | null) => {
    const keeps = leaflet !== null && SEGMENTS[leaflet].some(([segment]) => segment === values.segment);
    set(keeps || !values.segment ? { leaflet } : { leaflet, segment: null });
  };
  const setSegment = (segment: Segment | null) => {
    const leaflet = (Object.keys(SEGMENTS) as Leaflet[]).find((one) => SEGMENTS[one].some(([value]) => value === segment));
    set(segment === null || leaflet === undefined ? { segment } : { segment, leaflet });
  };
  return (
    <>
      <ChoiceRow label="leaflet" options={LEAFLETS} value={values.leaflet} set={setLeaflet} disabled={disabled} />
      <ChoiceRow label="segment" options={segments} value={values.segment} set={setSegment} disabled={disabled} />
      <ChoiceRow label="zone" options={ZONES} value={values.zone} set={(zone) => set({ zone })} disabled={disabled} />
    </>
  );
}

/** Site, muscle and head of an origin. */
export function OriginAxes({ values, set, disabled }: AxesProps) {
  return (
    <>
      <ChoiceRow label="site" options={SITES} value={values.site} set={(site) => set({ site })} disabled={disabled} />
      <ChoiceRow label="muscle" options={MUSCLES} value={values.muscle} set={(muscle) => set({ muscle })} disabled={disabled} />
      <ChoiceRow label="head" options={HEADS} value={values.head} set={(head) => set({ head })} disabled={disabled} />
    </>
  );
}
