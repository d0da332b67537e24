import { expect, test } from "vitest";
import { arcAt, arcAtPlace, axisMarks, filmSquares, rowOf, stripLayout } from "#renderer/strip/strip-layout.ts";

test("the parts stand beside each other inside the pane at any size", () => {
  for (let width = 120; width <= 700; width += 23) {
    const { axis, strip, profile, film } = stripLayout(width, 600);
    const parts = [axis, strip, profile, film];
    for (let i = 1; i < parts.length; i++)
      expect(parts[i]!.x).toBeGreaterThanOrEqual(parts[i - 1]!.x + parts[i - 1]!.width - 1e-9);
    expect(film.x + film.width).toBeLessThanOrEqual(width);
  }
});

test("the first point is at the bottom, and rows and arc lengths agree both ways", () => {
  const { strip } = stripLayout(260, 700);
  expect(rowOf(strip, 0, 12)).toBeCloseTo(strip.y + strip.height, 9);
  expect(rowOf(strip, 12, 12)).toBeCloseTo(strip.y, 9);
  for (const mm of [0, 3.3, 11.9]) expect(arcAt(strip, rowOf(strip, mm, 12), 12)).toBeCloseTo(mm, 9);
  expect(arcAt(strip, -50, 12)).toBe(12);
  expect(arcAt(strip, 5000, 12)).toBe(0);
});

test("the film's squares are apart, inside and in order, also when all sections are crowded at one end", () => {
  const { film, filmCount } = stripLayout(260, 700);
  for (const crowd of [1, 0.2]) {
    const at = Array.from({ length: filmCount }, (_, k) => (10 * crowd * (k + 0.5)) / filmCount);
    const squares = filmSquares(film, at, 10);
    squares.forEach((square, i) => {
      expect(square.y).toBeGreaterThanOrEqual(film.y - 1e-9);
      expect(square.y + square.side).toBeLessThanOrEqual(film.y + film.height + 1e-9);
      if (i > 0) expect(square.y + square.side).toBeLessThan(squares[i - 1]!.y);
    });
  }
});

test("axis marks are round, start at 0 and keep their distance", () => {
  expect(axisMarks(8.3, 600, 34)).toEqual([0, 0.5, 1, 1.5, 2, 2.5, 3, 3.5, 4, 4.5, 5, 5.5, 6, 6.5, 7, 7.5, 8]);
  expect(axisMarks(0.3, 600, 34)).toContain(0.3);
  expect(axisMarks(0, 600, 34)).toEqual([]);
});

test("a click on the film means the section under it, elsewhere the row", () => {
  const layout = stripLayout(260, 700);
  const at = Array.from({ length: layout.filmCount }, (_, k) => k * 0.05);
  filmSquares(layout.film, at, 10).forEach(({ x, y, side }, k) => {
    expect(arcAtPlace(layout, at, x + 3, y + side * 0.6, 10)).toBe(at[k]);
  });
  expect(arcAtPlace(layout, at, layout.strip.x + 3, layout.strip.y, 10)).toBeCloseTo(10, 9);
});
