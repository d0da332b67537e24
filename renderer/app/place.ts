/** Which screen is shown; kept in the address's fragment so that a reload and the back button work. */
export type Place =
  /** `handBack`: the assignment that is being handed back there. */
  | { readonly screen: "shelf"; readonly handBack?: string }
  | { readonly screen: "desk"; readonly specimen: string; readonly pass: string }
  | { readonly screen: "side-by-side"; readonly specimen: string; readonly a: string; readonly b: string }
  | { readonly screen: "study"; readonly study: string; readonly part: StudyPart };

/** The parts of a study's screen. */
export const STUDY_PARTS = ["passes", "protocol", "planning", "effort", "report"] as const;
export type StudyPart = (typeof STUDY_PARTS)[number];

/** The fragment that names a place. */
export function fragmentOf(place: Place): string {
  switch (place.screen) {
    case "shelf":
      return place.handBack === undefined ? "#/shelf" : path("shelf", "hand-back", place.handBack);
    case "desk":
      return path("desk", place.specimen, place.pass);
    case "side-by-side":
      return path("side-by-side", place.specimen, place.a, place.b);
    case "study":
      return path("study", place.study, place.part);
  }
}

/** The place that a fragment names; the shelf for anything else. */
export function placeOf(fragment: string): Place {
  const parts = partsOf(fragment);
  const [screen, specimen, first, second] = parts;
  if (screen === "study") return studyPlace(parts);
  if (screen === "shelf" && specimen === "hand-back" && parts.length === 3 && first !== "") return { screen, handBack: first! };
  if (parts.some((part) => part === "") || specimen === undefined || first === undefined) return { screen: "shelf" };
  if (screen === "desk" && parts.length === 3) return { screen, specimen, pass: first };
  if (screen === "side-by-side" && parts.length === 4) return { screen, specimen, a: first, b: second! };
  return { screen: "shelf" };
}

function studyPlace([, study, named = "passes", ...more]: readonly string[]): Place {
  const part = STUDY_PARTS.find((one) => one === named);
  if (study === undefined || study === "" || part === undefined || more.length > 0) return { screen: "shelf" };
  return { screen: "study", study, part };
}

function path(...parts: readonly string[]): string {
  return `#/${parts.map(encodeURIComponent).join("/")}`;
}

function partsOf(fragment: string): string[] {
  if (!fragment.startsWith("#/")) return [];
  try {
    return fragment.slice(2).split("/").map(decodeURIComponent);
  } catch {
    return [];
  }
}
