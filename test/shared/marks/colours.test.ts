import { readFileSync } from "node:fs";
import { expect, test } from "vitest";
import { coloursFrom, PICTURE_COLOURS } from "#shared/marks/colours.ts";

type Rgb = readonly [number, number, number];

// Simulation of dichromacy, severity 1, linear RGB: Machado, Oliveira & Fernandes, IEEE TVCG 2009;15:1291-1298 (table; from memory).
const SIGHTS: Record<string, readonly number[]> = {
  full: [1, 0, 0, 0, 1, 0, 0, 0, 1],
  protan: [0.152286, 1.052583, -0.204868, 0.114503, 0.786281, 0.099216, -0.003882, -0.048116, 1.051998],
  deutan: [0.367322, 0.860646, -0.227968, 0.280085, 0.672501, 0.047413, -0.01182, 0.04294, 0.968881],
  tritan: [1.255528, -0.076749, -0.178779, -0.078411, 0.930809, 0.147602, 0.004733, 0.691367, 0.3039],
};

function linear(hex: string): Rgb {
  const channel = (i: number) => {
    const c = Number.parseInt(hex.slice(i, i + 2), 16) / 255;
    return c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4;
  };
  return [channel(1), channel(3), channel(5)];
}

function seenBy(m: readonly number[], [r, g, b]: Rgb): Rgb {
  const row = (k: number) => Math.min(1, Math.max(0, m[k]! * r + m[k + 1]! * g + m[k + 2]! * b));
  return [row(0), row(3), row(6)];
}

// OKLab: Ottosson, "A perceptual color space for image processing", 2020 (coefficients from memory).
function okLab([r, g, b]: Rgb): Rgb {
  const l = Math.cbrt(0.4122214708 * r + 0.5363325363 * g + 0.0514459929 * b);
  const m = Math.cbrt(0.2119034982 * r + 0.6806995451 * g + 0.1073969566 * b);
  const s = Math.cbrt(0.0883024619 * r + 0.2817188376 * g + 0.6299787005 * b);
  return [
    0.2104542553 * l + 0.793617785 * m - 0.0040720468 * s,
    1.9779984951 * l - 2.428592205 * m + 0.4505937099 * s,
    0.0259040371 * l + 0.7827717662 * m - 0.808675766 * s,
  ];
}

// Contrast ratio: WCAG 2.2, "relative luminance" and "contrast ratio".
function contrast(a: string, b: string): number {
  const luminance = (hex: string) => {
    const [r, g, bl] = linear(hex);
    return 0.2126 * r + 0.7152 * g + 0.0722 * bl;
  };
  const [high, low] = [luminance(a), luminance(b)].sort((x, y) => y - x);
  return (high! + 0.05) / (low! + 0.05);
}

function nearestPair(colours: readonly string[], sight: readonly number[]): number {
  const places = colours.map((hex) => okLab(seenBy(sight, linear(hex))));
  let least = Number.POSITIVE_INFINITY;
  places.forEach((a, i) => {
    for (const b of places.slice(i + 1)) least = Math.min(least, Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]));
  });
  return least;
}

const css = readFileSync(new URL("../../../renderer/app/theme.css", import.meta.url), "utf8");
const block = (selector: string) => new RegExp(`${selector} \\{([^}]*)\\}`).exec(css)?.[1] ?? "";
const inBlock = (text: string, name: string) => new RegExp(`${name}:\\s*(#[0-9a-f]{6})`).exec(text)?.[1] ?? "";
const onPicture = block("\\.on-picture");
const root = block(":root");

test("the page's colours on pictures are those of the pictures, in both themes", () => {
  const found = coloursFrom((name) => inBlock(onPicture, name) || inBlock(root, name));
  expect(found).toEqual(PICTURE_COLOURS);
  // The light theme does not touch the tree colours.
  expect(block(':root\\[data-theme="light"\\]')).not.toContain("--tree-");
  for (const name of ["--accent", "--warn", "--ink", "--pane", "--line"]) expect(inBlock(onPicture, name), name).not.toBe("");
});

test("tree colours stay apart from each other and from the accent in every sight", () => {
  for (const sight of Object.keys(SIGHTS)) {
    expect(nearestPair([...PICTURE_COLOURS.trees, PICTURE_COLOURS.accent], SIGHTS[sight]!), sight).toBeGreaterThan(0.08);
  }
});

// WCAG 2.2, 1.4.3: 4.5:1 for texts; the names of trees are written in their colours.
test("colours stand out from the grounds of pictures", () => {
  for (const ground of ["#000000", inBlock(onPicture, "--pane"), inBlock(onPicture, "--well")]) {
    for (const colour of [...PICTURE_COLOURS.trees, PICTURE_COLOURS.accent, PICTURE_COLOURS.ink, PICTURE_COLOURS.warn]) {
      expect(contrast(colour, ground), `${colour} on ${ground}`).toBeGreaterThanOrEqual(4.5);
    }
  }
});

test("a missing property falls back to the colours of pictures", () => {
  expect(coloursFrom((name) => (name === "--accent" ? " #123456 " : ""))).toEqual({ ...PICTURE_COLOURS, accent: "#123456" });
});
