import { type Alpha, krippendorffAlpha, nominalAlphaOf, nominalSums } from "#shared/agreement/alpha.ts";
import { gwetAgreement } from "#shared/agreement/gwet.ts";
import { type OverSpecimens, overSpecimens } from "#shared/agreement/jackknife.ts";
import { type AgreementWeights, type CategoryAgreement, cohenKappa, fleissKappa } from "#shared/agreement/kappa.ts";
import type { SpecimenItems, StudySpecimen } from "#shared/agreement/study/study.ts";

/** A label whose values annotators may choose differently. */
interface Label {
  readonly label: string;
  readonly on: "nodes" | "strands";
  /** Categories in order, where there is one; null = they have no order. */
  readonly order: readonly string[] | null;
  /** Its value on a node or strand of a file; undefined = not labelled. */
  readonly read: (thing: Readonly<Record<string, unknown>>) => unknown;
  /** Which canonical nodes can carry it. */
  readonly type?: "origin" | "end";
}

const LABELS: readonly Label[] = [
  { label: "kind of end", on: "nodes", order: null, read: (node) => node.kind, type: "end" },
  { label: "leaflet", on: "nodes", order: null, read: (node) => node.leaflet, type: "end" },
  { label: "segment", on: "nodes", order: null, read: (node) => node.segment, type: "end" },
  { label: "zone", on: "nodes", order: ["free-edge", "rough", "base"], read: (node) => node.zone, type: "end" },
  { label: "origin site", on: "nodes", order: null, read: (node) => node.site, type: "origin" },
  { label: "muscle", on: "nodes", order: null, read: (node) => node.muscle, type: "origin" },
  { label: "strut", on: "strands", order: null, read: (strand) => strand.strut === true },
  { label: "certainty of strands", on: "strands", order: ["doubtful", "sure"], read: (strand) => strand.certainty ?? "sure" },
];

/** Category that stands for "not marked" where it takes part. */
const ABSENT = "absent";

/** Agreement of annotators on one label. */
export interface CategoricalAgreement {
  readonly label: string;
  readonly on: "nodes" | "strands";
  readonly categories: readonly string[];
  readonly ordered: boolean;
  /** On items both marked; or with not marking an item as a category of its own. */
  readonly absentCounts: boolean;
  readonly title: string;
  readonly items: number;
  readonly cohen: readonly {
    readonly a: string;
    readonly b: string;
    /** shape [categories of a][categories of b], counts. */
    readonly table: readonly (readonly number[])[];
    readonly plain: CategoryAgreement;
    readonly linear: CategoryAgreement | null;
    readonly quadratic: CategoryAgreement | null;
  }[];
  readonly fleiss: CategoryAgreement;
  readonly alphaNominal: Alpha;
  readonly alphaOrdinal: Alpha | null;
  readonly ac1: CategoryAgreement;
  readonly ac2: CategoryAgreement | null;
  /** Nominal alpha with intervals over specimens: the main ones. */
  readonly overSpecimens: OverSpecimens;
}

/** Agreement on every label that occurs, on items both marked and with "absent" as a category. @param seed of the bootstrap. */
export function categoricalAgreement(
  annotators: readonly string[],
  specimens: readonly StudySpecimen[],
  items: readonly SpecimenItems[],
  seed: number,
): CategoricalAgreement[] {
  return LABELS.flatMap((label) => {
    const rows = specimens.map((specimen, s) => labelRows(label, specimen, items[s]!));
    const seen = new Set(rows.flat(2).filter((value) => value !== null && value !== ABSENT)) as Set<string>;
    const values = label.order ? label.order.filter((value) => seen.has(value)) : [...seen].sort();
    if (values.length === 0) return [];
    return [false, true].map((absentCounts) => agreementOnLabel(label, values, annotators, rows, absentCounts, seed));
  });
}

/** shape [items][annotators]: category; "absent" = not marked; null = specimen not done, or item not labelled. */
function labelRows(label: Label, specimen: StudySpecimen, items: SpecimenItems): (string | null)[][] {
  const things = specimen.passes.map(
    ({ file }) => new Map(file.trees.flatMap((tree) => [...tree.nodes, ...tree.strands].map((one) => [one.id, one]))),
  );
  const table = label.on === "nodes" ? items.nodes : items.strands;
  return table.items.flatMap(({ members }) => {
    const someone = specimen.firstPass.find((p) => p >= 0 && members[p]! >= 0);
    if (someone === undefined) return [];
    const node = specimen.passes[someone]!.canonical.nodes[members[someone]!];
    if (label.on === "nodes" && node!.type !== label.type) return [];
    const row = specimen.firstPass.map((p) => {
      if (p < 0) return null;
      if (members[p]! < 0) return ABSENT;
      const id = specimen.passes[p]!.canonical[label.on][members[p]!]!.id;
      const value = label.read((things[p]!.get(id) ?? {}) as Readonly<Record<string, unknown>>);
      return value === undefined || value === null ? null : String(value);
    });
    return [row];
  });
}

function agreementOnLabel(
  { label, on, order }: Label,
  values: readonly string[],
  annotators: readonly string[],
  rows: readonly (readonly (readonly (string | null)[])[])[],
  absentCounts: boolean,
  seed: number,
): CategoricalAgreement {
  const categories = absentCounts ? [...values, ABSENT] : values;
  const ordered = order !== null && !absentCounts && categories.length > 2;
  const number = (value: string | null) => (value === null ? null : orNull(categories.indexOf(value)));
  const numbers = rows.map((specimen) => specimen.map((row) => row.map(number)));
  const sums = numbers.map((specimen) => nominalSums(specimen, categories.length));
  const all = numbers.flat();
  const counts = all.map((row) => categories.map((_, c) => row.filter((value) => value === c).length));
  const complete = counts.filter((_, k) => all[k]!.every((value) => value !== null));
  const pairs = annotators.flatMap((a, i) => annotators.slice(i + 1).map((b, k) => ({ a, b, i, j: i + 1 + k })));
  const weighted = (table: readonly (readonly number[])[], weights: AgreementWeights) =>
    ordered ? cohenKappa(table, weights) : null;
  return {
    label,
    on,
    categories,
    ordered,
    absentCounts,
    title: absentCounts ? "all items, not marking one counted as a category" : "given that both marked it",
    items: all.filter((row) => row.filter((value) => value !== null).length >= 2).length,
    cohen: pairs.map(({ a, b, i, j }) => {
      const table = categories.map((_, x) => categories.map((__, y) => all.filter((row) => row[i] === x && row[j] === y).length));
      return {
        a,
        b,
        table,
        plain: cohenKappa(table, "plain"),
        linear: weighted(table, "linear"),
        quadratic: weighted(table, "quadratic"),
      };
    }),
    fleiss: fleissKappa(complete),
    alphaNominal: krippendorffAlpha(all, "nominal"),
    alphaOrdinal: ordered ? krippendorffAlpha(all, "ordinal") : null,
    ac1: gwetAgreement(counts, "plain"),
    ac2: ordered ? gwetAgreement(counts, "quadratic") : null,
    overSpecimens: overSpecimens((chosen) => nominalAlphaOf(chosen.map((k) => sums[k]!)), numbers.length, seed, 1),
  };
}

function orNull(index: number): number | null {
  return index < 0 ? null : index;
}
