import { expect, test } from "vitest";
import { edgeLetters } from "#renderer/section/direction-letters.ts";
import { depthText, lengthText, scaleBar } from "#renderer/section/scale-bar.ts";
import { WheelSteps, wheelTravelPx } from "#renderer/section/wheel-steps.ts";

test("the scale bar is the longest of 1, 2, 5 times a power of ten that fits", () => {
  expect(scaleBar(0.01, 150)).toEqual({ mm: 1, px: 100, text: "1 mm" });
  expect(scaleBar(0.02, 150)).toMatchObject({ mm: 2, px: 100 });
  expect(scaleBar(0.001, 150)).toMatchObject({ mm: 0.1, text: "0.1 mm" });
  expect(scaleBar(0.5, 150)).toMatchObject({ mm: 50, text: "50 mm" });
  expect(scaleBar(0.1, 100)).toMatchObject({ mm: 10, px: 100 });
});

test("the scale bar never exceeds its room and fills at least two fifths of it", () => {
  for (let mmPerPx = 0.001; mmPerPx < 1; mmPerPx *= 1.07) {
    const bar = scaleBar(mmPerPx, 180);
    expect(bar.px).toBeLessThanOrEqual(180 * (1 + 1e-9));
    expect(bar.px).toBeGreaterThanOrEqual(180 * 0.4 - 1e-9);
  }
});

test("lengths and depths say their unit and their side", () => {
  expect(lengthText(0.1234)).toBe("0.123 mm");
  expect(lengthText(3.4177)).toBe("3.42 mm");
  expect(depthText(0.131)).toBe("0.13 mm behind");
  expect(depthText(-0.5)).toBe("0.50 mm before");
  expect(depthText(-0.001)).toBe("on the plane");
});

// Axes of an LPS frame: +x to the patient's left, +y posterior, +z superior (NRRD and DICOM use the same letters).
test("edge letters name the directions of an LPS frame", () => {
  expect(edgeLetters({ right: [1, 0, 0], down: [0, 1, 0] })).toEqual({ left: "R", right: "L", top: "A", bottom: "P" });
  expect(edgeLetters({ right: [1, 0, 0], down: [0, 0, -1] })).toMatchObject({ top: "S", bottom: "I" });
  const c = Math.cos(Math.PI / 6);
  expect(edgeLetters({ right: [c, 0.5, 0], down: [-0.5, c, 0] }).right).toBe("LP");
  expect(edgeLetters({ right: [0.99, 0.14, 0], down: [-0.14, 0.99, 0] }).right).toBe("L");
});

test("a wheel notch is one plane whatever the browser's unit; a smooth wheel gathers travel and forgets it on turning back", () => {
  const wheel = new WheelSteps();
  expect(wheel.take(wheelTravelPx({ deltaX: 0, deltaY: 100, deltaMode: 0 }))).toBe(1);
  expect(wheel.take(wheelTravelPx({ deltaX: 0, deltaY: -120, deltaMode: 0 }))).toBe(-1);
  expect(wheel.take(wheelTravelPx({ deltaX: 0, deltaY: 3, deltaMode: 1 }))).toBe(1);
  expect(wheel.take(wheelTravelPx({ deltaX: 100, deltaY: 0, deltaMode: 0 }))).toBe(1);
  expect([14, 14, 14].map((px) => wheel.take(px))).toEqual([0, 0, 1]);
  expect([14, -14, -14, -14].map((px) => wheel.take(px))).toEqual([0, 0, 0, -1]);
});
