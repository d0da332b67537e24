// Oblique planes of 900 x 700 pixels from a store on disk, in one thread. Run: npm run bench -- section
import { rmSync } from "node:fs";
import { openStorePyramid } from "#main/engine/store-reader.ts";
import type { SectionRequest } from "#shared/api/engine.ts";
import { pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { add, cross, normalise, scale } from "#shared/geometry/vec3.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { section } from "#shared/volume/section.ts";
import { scratchFolder, seeded, writeSpecimen } from "#test/main/engine/write-store.ts";

const SIDE = 384;
const SPACING = 0.04;

/** A plane through the middle; `tilt` is the normal. */
function planeAcross(tilt: Vec3, mmPerPixel: number, width: number, height: number): SectionRequest["plane"] {
  const normal = normalise(tilt);
  const u = normalise(cross(Math.abs(normal[2]) < 0.9 ? [0, 0, 1] : [0, 1, 0], normal));
  const v = cross(normal, u);
  const middle: Vec3 = [(SIDE / 2) * SPACING, (SIDE / 2) * SPACING, (SIDE / 2) * SPACING];
  const corner = add(middle, add(scale(u, (-width / 2) * mmPerPixel), scale(v, (-height / 2) * mmPerPixel)));
  return { origin: pointMm(...corner), u: scale(u, mmPerPixel), v: scale(v, mmPerPixel), width, height };
}

/** One line a case: median of 7 after one warm-up, and a checksum. */
export function bench(print: (line: string) => void, cpuMs: () => number): void {
  const scratch = scratchFolder();
  try {
    const random = seeded(7);
    const voxels = new Uint16Array(SIDE ** 3);
    for (let n = 0; n < voxels.length; n++) voxels[n] = 65535 * random();
    const { folder } = writeSpecimen(scratch.path, "bench", plainGrid([SIDE, SIDE, SIDE], [SPACING, SPACING, SPACING]), voxels);
    const common = { slabMode: "max", low: 0, high: 65535 } as const;
    const fill = SPACING * 0.4;
    const cases: [string, Omit<SectionRequest, "ticket" | "specimen">][] = [
      ["flat, 1 voxel/pixel     ", { ...common, plane: planeAcross([0, 0, 1], SPACING, 900, 700), slabMm: 0, quality: "still" }],
      ["flat, 0.4 voxel/pixel   ", { ...common, plane: planeAcross([0, 0, 1], fill, 900, 700), slabMm: 0, quality: "still" }],
      ["oblique, 0.4 voxel/pixel", { ...common, plane: planeAcross([1, 2, 3], fill, 900, 700), slabMm: 0, quality: "still" }],
      ["oblique along a diagonal", { ...common, plane: planeAcross([1, -1, 0.2], fill, 900, 700), slabMm: 0, quality: "still" }],
      [
        "oblique, moving, half   ",
        { ...common, plane: planeAcross([1, 2, 3], 2 * fill, 450, 350), slabMm: 0, quality: "moving" },
      ],
      ["oblique slab 0.4 mm max ", { ...common, plane: planeAcross([1, 2, 3], fill, 900, 700), slabMm: 0.4, quality: "still" }],
    ];
    for (const [name, request] of cases) {
      const cold = openStorePyramid(folder);
      const begin = cpuMs();
      section(cold, request);
      const first = cpuMs() - begin;
      const times: number[] = [];
      let sum = 0;
      let level = 0;
      for (let round = 0; round < 8; round++) {
        const start = cpuMs();
        const { body, header } = section(cold, request);
        times.push(cpuMs() - start);
        level = header.level;
        sum = body.reduce((a, b) => a + b, 0);
      }
      cold.close();
      const median = times.slice(1).sort((a, b) => a - b)[3]!;
      const { width, height } = request.plane;
      print(
        `${name} ${width} x ${height} level ${level}  ${median.toFixed(1)} ms CPU from the cache, ${first.toFixed(1)} ms with reading  checksum ${sum}`,
      );
    }
  } finally {
    rmSync(scratch.path, { recursive: true, force: true });
  }
}
