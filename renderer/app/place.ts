/** Which screen is shown; kept in the address's fragment so that a reload and the back button work. */
export type Place =
  | { readonly screen: "shelf" }
  | { readonly screen: "desk"; readonly specimen: string; readonly pass: string }
  | { readonly screen: "side-by-side"; readonly specimen: string; readonly a: string; readonly b: string };

/** The fragment that names a place. */
export function fragmentOf(place: Place): string {
  switch (place.screen) {
    case "shelf":
      return "#/shelf";
    case "desk":
      return path("desk", place.specimen, place.pass);
    case "side-by-side":
      return path("side-by-side", place.specimen, place.a, place.b);
  }
}

/** The place that a fragment names; the shelf for anything else. */
export function placeOf(fragment: string): Place {
  const parts = partsOf(fragment);
  const [screen, specimen, first, second] = parts;
  if (parts.some((part) => part === "") || specimen === undefined || first === undefined) return { screen: "shelf" };
  if (screen === "desk" && parts.length === 3) return { screen, specimen, pass: first };
  if (screen === "side-by-side" && parts.length === 4) return { screen, specimen, a: first, b: second! };
  return { screen: "shelf" };
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
