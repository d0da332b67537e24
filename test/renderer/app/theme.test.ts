import { readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, it } from "vitest";

const css = readFileSync(join(import.meta.dirname, "../../../renderer/app/theme.css"), "utf8");

/** Colours that a rule sets by custom property, hexadecimal ones only. */
function coloursOf(selector: string): Map<string, string> {
  const start = css.indexOf(`${selector} {`);
  const body = css.slice(start, css.indexOf("}", start));
  return new Map([...body.matchAll(/--([\w-]+):\s*(#[0-9a-f]{6})\b/gi)].map((found) => [found[1]!, found[2]!]));
}

/** Relative luminance. Source: WCAG 2.2, "relative luminance". */
function luminance(hex: string): number {
  const channel = (at: number) => {
    const c = Number.parseInt(hex.slice(at, at + 2), 16) / 255;
    return c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4;
  };
  return 0.2126 * channel(1) + 0.7152 * channel(3) + 0.0722 * channel(5);
}

/** Contrast ratio. Source: WCAG 2.2, "contrast ratio". */
function contrast(a: string, b: string): number {
  const [light, dark] = [luminance(a), luminance(b)].sort((x, y) => y - x) as [number, number];
  return (light + 0.05) / (dark + 0.05);
}

describe.each([
  ["dark", ":root"],
  ["light", ':root[data-theme="light"]'],
])("the %s theme", (_, selector) => {
  const colours = coloursOf(selector);
  const of = (name: string) => colours.get(name)!;

  it("writes every text at 4.5:1 or more on every surface it stands on (WCAG 1.4.3)", () => {
    const poor = ["ink", "soft", "accent", "warn", "good"].flatMap((text) =>
      ["paper", "pane", "raised"]
        .filter((surface) => contrast(of(text), of(surface)) < 4.5)
        .map((surface) => `${text} on ${surface}`),
    );
    expect(poor).toEqual([]);
    expect(contrast(of("on-accent"), of("accent"))).toBeGreaterThanOrEqual(4.5);
    expect(contrast(of("ink"), of("accent-wash"))).toBeGreaterThanOrEqual(4.5);
    expect(contrast(of("ink"), of("warn-wash"))).toBeGreaterThanOrEqual(4.5);
  });

  it("draws focus rings and edges of fields at 3:1 or more (WCAG 1.4.11)", () => {
    const poor = ["accent", "edge"].flatMap((line) =>
      ["paper", "pane", "raised"]
        .filter((surface) => contrast(of(line), of(surface)) < 3)
        .map((surface) => `${line} on ${surface}`),
    );
    expect(poor).toEqual([]);
  });
});
