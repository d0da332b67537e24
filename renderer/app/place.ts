/** Which screen is shown; kept in the address's fragment so that a reload and the back button work. */
export type Place = { readonly screen: "shelf" } | { readonly screen: "desk"; readonly specimen: string; readonly pass: string };

/** The fragment that names a place. */
export function fragmentOf(place: Place): string {
  if (place.screen === "shelf") return "#/shelf";
  return `#/desk/${encodeURIComponent(place.specimen)}/${encodeURIComponent(place.pass)}`;
}

/** The place that a fragment names; the shelf for anything else. */
export function placeOf(fragment: string): Place {
  const desk = /^#\/desk\/([^/]+)\/([^/]+)$/.exec(fragment);
  if (desk === null) return { screen: "shelf" };
  try {
    return { screen: "desk", specimen: decodeURIComponent(desk[1]!), pass: decodeURIComponent(desk[2]!) };
  } catch {
    return { screen: "shelf" };
  }
}
