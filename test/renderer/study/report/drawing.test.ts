import { describe, expect, it } from "vitest";
import { drawingOf } from "#renderer/study/report/drawing.ts";
import { lineChart } from "#shared/report/svg-plots.ts";

describe("a drawing of the report on the page", () => {
  it("has every part that the report's file has", () => {
    const svg = lineChart("Label & more", [0, 1], [{ name: "median", values: [0, 1] }], "x", "y", [0, 1]);
    const drawing = drawingOf(svg)!;
    expect(drawing.getAttribute("viewBox")).toBe("0 0 640 320");
    expect(drawing.getAttribute("aria-label")).toBe("Label & more");
    expect(drawing.querySelectorAll("line, polyline, text")).toHaveLength(svg.match(/<(line|polyline|text)\b/g)!.length);
    expect(drawing.textContent).toContain("median");
  });

  it("leaves out all that could act, load or style", () => {
    const drawing = drawingOf(
      `<svg xmlns="http://www.w3.org/2000/svg" onload="x()"><script>x()</script><a href="http://example.org"><text>in a link</text></a><style>*{}</style><foreignObject><p>x</p></foreignObject><rect fill="url(http://example.org)" style="x" width="3" onclick="x()"/><image href="x"/></svg>`,
    )!;
    expect([...drawing.querySelectorAll("*")].map(({ localName }) => localName)).toEqual(["rect"]);
    const attributes = [drawing, ...drawing.querySelectorAll("*")].flatMap((one) => one.getAttributeNames());
    expect(attributes).toEqual(["width"]);
  });

  it("is none when the text is no drawing", () => {
    expect(drawingOf("no drawing")).toBeNull();
    expect(drawingOf("<html xmlns='http://www.w3.org/1999/xhtml'/>")).toBeNull();
  });
});
