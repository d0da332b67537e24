import { frameAnswer, jsonAnswer } from "#main/http/answers.ts";
import {
  filmRequest,
  followMoreRequest,
  followOpenRequest,
  guideCloseRequest,
  guideOpenRequest,
  guidePreviewRequest,
  histogramRequest,
  id,
  sectionRequest,
  snapRequest,
  solveRequest,
  stripRequest,
  surfaceRequest,
  valueRequest,
} from "#main/http/engine-shapes.ts";
import { pictureRequest } from "#main/http/picture.ts";
import type { Ports } from "#main/http/ports.ts";
import { readJson } from "#main/http/read-body.ts";
import type { RouteHandlers } from "#main/http/route-handlers.ts";

/** What the engine computes next to the voxels. */
export function engineRoutes({ engine, library }: Ports): RouteHandlers {
  let pictures = 0;
  return {
    section: async (c) => frameAnswer(await engine.section(await readJson(c.req.raw, sectionRequest))),
    value: async (c) => {
      const { specimen, at } = await readJson(c.req.raw, valueRequest);
      return jsonAnswer(await engine.value(specimen, at));
    },
    histogram: async (c) => jsonAnswer(await engine.histogram((await readJson(c.req.raw, histogramRequest)).specimen)),
    snap: async (c) => jsonAnswer(await engine.snap(await readJson(c.req.raw, snapRequest))),
    openGuide: async (c) => jsonAnswer(await engine.openGuide(await readJson(c.req.raw, guideOpenRequest))),
    previewGuide: async (c) => jsonAnswer(await engine.previewGuide(await readJson(c.req.raw, guidePreviewRequest))),
    closeGuide: async (c) => {
      await engine.closeGuide((await readJson(c.req.raw, guideCloseRequest)).session);
      return jsonAnswer({});
    },
    solve: async (c) => jsonAnswer(await engine.solve(await readJson(c.req.raw, solveRequest))),
    openFollow: async (c) => jsonAnswer(await engine.openFollow(await readJson(c.req.raw, followOpenRequest))),
    moreFollow: async (c) => jsonAnswer(await engine.moreFollow(await readJson(c.req.raw, followMoreRequest))),
    closeFollow: async (c) => {
      await engine.closeFollow((await readJson(c.req.raw, guideCloseRequest)).session);
      return jsonAnswer({});
    },
    strip: async (c) => frameAnswer(await engine.strip(await readJson(c.req.raw, stripRequest))),
    film: async (c) => frameAnswer(await engine.film(await readJson(c.req.raw, filmRequest))),
    surface: async (c) => frameAnswer(await engine.surface(await readJson(c.req.raw, surfaceRequest))),
    picture: async (c) => {
      const specimen = await library.specimen(id(c.req.param("specimen"), "path.specimen"));
      pictures += 1;
      return frameAnswer(await engine.section(pictureRequest(specimen, pictures)));
    },
  };
}
