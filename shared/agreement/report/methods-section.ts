import type { ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { text } from "#shared/agreement/report/report-text.ts";
import { nodeTolerance } from "#shared/agreement/study/study.ts";

const REFERENCES: readonly string[] = [
  "Barnhart HX, Kosinski AS, Haber MJ. Assessing individual agreement. J Biopharm Stat 2007;17:697-719.",
  "Bland JM, Altman DG. Statistical methods for assessing agreement between two methods of clinical measurement. Lancet 1986;i:307-310.",
  "Bunke H, Allermann G. Inexact graph matching for structural pattern recognition. Pattern Recognit Lett 1983;1:245-253.",
  "Carkeet A. Exact parametric confidence intervals for Bland-Altman limits of agreement. Optom Vis Sci 2015;92:e71-e80.",
  "Cohen J. Weighted kappa. Psychol Bull 1968;70:213-220.",
  "Darroch JN. The multiple-recapture census. Biometrika 1958;45:343-359.",
  "Efron B, Tibshirani RJ. An Introduction to the Bootstrap. 1993.",
  "Feinstein AR, Cicchetti DV. High agreement but low kappa. J Clin Epidemiol 1990;43:543-558.",
  "Fleiss JL. Measuring nominal scale agreement among many raters. Psychol Bull 1971;76:378-382.",
  "Gwet KL. Computing inter-rater reliability and its variance in the presence of high agreement. Br J Math Stat Psychol 2008;61:29-48.",
  "Henderson CR. Estimation of variance and covariance components. Biometrics 1953;9:226-252.",
  "Koo TK, Li MY. A guideline of selecting and reporting intraclass correlation coefficients. J Chiropr Med 2016;15:155-163.",
  "Kottner J, et al. Guidelines for Reporting Reliability and Agreement Studies (GRRAS). J Clin Epidemiol 2011;64:96-106.",
  "Krippendorff K. Computing Krippendorff's alpha-reliability. 2011.",
  "McGraw KO, Wong SP. Forming inferences about some intraclass correlation coefficients. Psychol Methods 1996;1:30-46, erratum 1:390.",
  "Obuchowski NA, et al. 2014, on the individual agreement of a computed method with readers (gamma; where it appeared is not at hand).",
  "Schaap M, et al. Standardized evaluation methodology for coronary artery centerline extraction. Med Image Anal 2009;13:701-714.",
  "Shrout PE, Fleiss JL. Intraclass correlations: uses in assessing rater reliability. Psychol Bull 1979;86:420-428.",
  "de Vet HCW, et al. When to use agreement versus reliability measures. J Clin Epidemiol 2006;59:1033-1039.",
  "Warfield SK, et al. Simultaneous truth and performance level estimation. IEEE Trans Med Imaging 2004;23:903-921.",
  "Zou GY. Confidence interval estimation for the Bland-Altman limits of agreement with multiple observations per individual. Stat Methods Med Res 2013;22:630-642.",
];

/** How everything was computed, and the sources. */
export function methodsSection({ options, context }: ReportInput): ReportSection {
  const { tolerance, merge, positionScale, minimumDiameter } = options.compare;
  const items = [
    `Comparison form: nodes of two strands are dissolved, forks joined by strands shorter than ${merge} mm are one fork at their mean place; lengths are sums of distances between the stored points.`,
    `Items: strands of all passes over a specimen sorted into groups with at most one strand of each pass, greatest total affinity (integral over both centrelines of max(0, 1 - distance / 1 mm)); two strands can be of one group when at least half of each lies within ${tolerance} mm of the other. Nodes: of one type, within ${nodeTolerance(tolerance)} mm. Exact in each connected part up to a stated size, else the best found, and said so.`,
    `Edit distance between trees: undirected attributed graphs, nodes and strands cost 1 to insert or delete, node place over ${positionScale} mm (at most 2), strand length relative; origins held to each other; proven by an exact search with lower bounds (Bunke & Allermann 1983).`,
    "Overlap and distances: centrelines sampled at half the smallest voxel spacing, nearest points; a nearest-point variant of Schaap et al. 2009, whose correspondence is ordered.",
    minimumDiameter === null
      ? "No minimum diameter was set, so overlap above it (OT) is not reported."
      : `Minimum diameter ${minimumDiameter} mm.`,
    "Radius and angles: mean radius weighted by length; straightness angle between the incoming strand and the bisector of the two outgoing, branching angle between the two outgoing, directions over one to three local diameters from the fork; given only where exactly two strands leave.",
    "ICC: six forms from one-way and two-way mean squares (Shrout & Fleiss 1979; McGraw & Wong 1996 with erratum), reported after Koo & Li 2016. SEM and SDC after de Vet et al. 2006, a negative variance between annotators taken as 0. Variance components by Henderson's method 1.",
    "Rows that an annotator lacks: intraclass correlations rest on complete rows, with their count; Krippendorff's interval alpha on all.",
    "Clustering: items of one valve are not independent. The main interval is the delete-one-specimen jackknife, t with m - 1 degrees of freedom: none for one specimen; for two to four the values of each and their range; five to nine called weak; from ten on a BCa bootstrap over specimens beside it (Efron & Tibshirani 1993). F-based and asymptotic intervals only with one item a specimen, or marked as conditional on these valves.",
    "Bland-Altman: one difference a specimen: exact intervals of the limits (Carkeet 2015); several: variance between and within specimens, intervals by MOVER (Zou 2013).",
    "Labels: Cohen's kappa with the Fleiss-Cohen-Everitt standard error, plain, linear and quadratic; Fleiss' kappa; Krippendorff's alpha; Gwet's AC1 and AC2.",
    "Detection: positive agreement alone; capture and recapture after Darroch 1958; rates by expectation-maximisation (Warfield et al. 2004) only with three annotators and candidates that all were shown and all declined.",
    "Method against annotators: D and gamma over specimens with t intervals, from five specimens on; a verdict only against a margin set beforehand (Obuchowski et al. 2014; Barnhart et al. 2007).",
    `Everything that is drawn at random is drawn from the seed ${options.seed}; the same passes give the same numbers. The order of the files changes nothing.`,
    `Computed by ${context.software.name} ${context.software.version}. Item table in long form: items.csv (a row for each item and pass, also where the pass has none of it).`,
  ];
  return {
    id: "methods",
    title: "Methods and sources",
    blocks: [
      { kind: "list", items },
      { kind: "heading", text: "Sources" },
      { kind: "list", items: REFERENCES },
      text("Titles of these sources are from memory.", "quiet"),
    ],
  };
}
