import { jsonAnswer } from "#main/http/answers.ts";
import { id } from "#main/http/engine-shapes.ts";
import {
  annotatorRequest,
  appendRequest,
  branchRequest,
  forceRequest,
  rebuildRequest,
  specimenPatch,
  stateRequest,
  windowRequest,
} from "#main/http/library-shapes.ts";
import type { Ports } from "#main/http/ports.ts";
import { LOG_LIMIT_BYTES, readJson } from "#main/http/read-body.ts";
import type { RouteHandlers } from "#main/http/route-handlers.ts";
import { refuse } from "#main/http/shape.ts";

/** Specimens, passes and their logs. */
export function libraryRoutes({ library, hello }: Ports): RouteHandlers {
  const specimenOf = (context: { req: { param(name: string): string | undefined } }) =>
    id(context.req.param("specimen"), "path.specimen");
  const passOf = (context: { req: { param(name: string): string | undefined } }) =>
    [specimenOf(context), id(context.req.param("pass"), "path.pass")] as const;
  return {
    hello: async () => jsonAnswer(hello()),
    shelf: async () => jsonAnswer(await library.shelf()),
    specimen: async (c) => jsonAnswer(await library.specimen(specimenOf(c))),
    changeSpecimen: async (c) =>
      jsonAnswer(await library.changeSpecimen(specimenOf(c), await readJson(c.req.raw, specimenPatch))),
    removeSpecimen: async (c) => {
      const { force } = await readJson(c.req.raw, forceRequest);
      await library.removeSpecimen(specimenOf(c), force === true);
      return jsonAnswer({});
    },
    createPass: async (c) => {
      const { annotator } = await readJson(c.req.raw, annotatorRequest);
      return jsonAnswer(await library.createPass(specimenOf(c), annotator));
    },
    readLog: async (c) => {
      const from = c.req.query("from") ?? "0";
      if (!/^\d{1,15}$/.test(from)) throw refuse("query.from", "a whole number", from);
      return jsonAnswer(await library.readLog(...passOf(c), Number(from)));
    },
    appendLog: async (c) => {
      const request = await readJson(c.req.raw, appendRequest, LOG_LIMIT_BYTES);
      return jsonAnswer(await library.appendLog(...passOf(c), request));
    },
    keepBranch: async (c) => {
      const { lines, name } = await readJson(c.req.raw, branchRequest, LOG_LIMIT_BYTES);
      return jsonAnswer({ pass: await library.keepBranch(...passOf(c), lines, name) });
    },
    rebuildLog: async (c) => {
      const { lines } = await readJson(c.req.raw, rebuildRequest, LOG_LIMIT_BYTES);
      return jsonAnswer(await library.rebuildLog(...passOf(c), lines));
    },
    claimPass: async (c) => {
      const { window } = await readJson(c.req.raw, windowRequest);
      return jsonAnswer({ writer: await library.claimPass(...passOf(c), window) });
    },
    releasePass: async (c) => {
      const { window } = await readJson(c.req.raw, windowRequest);
      await library.releasePass(...passOf(c), window);
      return jsonAnswer({});
    },
    finishPass: async (c) => {
      const { state } = await readJson(c.req.raw, stateRequest);
      return jsonAnswer(await library.setPassState(...passOf(c), state));
    },
  };
}
