import type { Reasons } from "#shared/agreement/interval.ts";
import type { SpecimenItems, StudySpecimen } from "#shared/agreement/study/study.ts";
import type { CanonicalType } from "#shared/compare/canonical.ts";
import { distance } from "#shared/geometry/vec3.ts";

/** How far apart annotators place the same nodes, millimetres; a place has no intraclass correlation. */
export interface NodePlaces {
  readonly type: CanonicalType;
  readonly items: number;
  /** Root mean square distance of two annotators' places. */
  readonly rmsDistance: number | null;
  /** Standard deviation about the item's mean place along x, y and z of the frame. */
  readonly sdPerAxis: readonly [number, number, number] | null;
  readonly reasons: Reasons;
}

/** Spread of places of origins, forks and ends that two annotators or more marked. */
export function nodePlaces(specimens: readonly StudySpecimen[], items: readonly SpecimenItems[]): NodePlaces[] {
  return (["origin", "fork", "end"] as const).map((type) => {
    const groups = specimens.flatMap((specimen, s) =>
      items[s]!.nodes.items.flatMap(({ members }) => {
        const nodes = specimen.firstPass
          .filter((p) => p >= 0 && members[p]! >= 0)
          .map((p) => specimen.passes[p]!.canonical.nodes[members[p]!]!);
        return nodes.length >= 2 && nodes[0]!.type === type ? [nodes.map((node) => node.place)] : [];
      }),
    );
    if (groups.length === 0) {
      const why = `No ${type} was marked by two annotators.`;
      return { type, items: 0, rmsDistance: null, sdPerAxis: null, reasons: { rmsDistance: why, sdPerAxis: why } };
    }
    let [pairs, squares, freedom] = [0, 0, 0];
    const perAxis: [number, number, number] = [0, 0, 0];
    for (const places of groups) {
      freedom += places.length - 1;
      places.forEach((place, i) => {
        for (const other of places.slice(i + 1)) {
          pairs += 1;
          squares += distance(place, other) ** 2;
        }
      });
      for (const axis of [0, 1, 2] as const) {
        const mean = places.reduce((sum, place) => sum + place[axis], 0) / places.length;
        perAxis[axis] += places.reduce((sum, place) => sum + (place[axis] - mean) ** 2, 0);
      }
    }
    const sd = (sum: number) => Math.sqrt(sum / freedom);
    return {
      type,
      items: groups.length,
      rmsDistance: Math.sqrt(squares / pairs),
      sdPerAxis: [sd(perAxis[0]), sd(perAxis[1]), sd(perAxis[2])],
      reasons: {},
    };
  });
}
