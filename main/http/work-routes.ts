import { bytesAnswer, jsonAnswer } from "#main/http/answers.ts";
import { id, overlookedRequest, searchRequest, windowName } from "#main/http/engine-shapes.ts";
import { EventStreams } from "#main/http/event-stream.ts";
import { COMMON_HEADERS } from "#main/http/headers.ts";
import {
  emptyRequest,
  exportRequest,
  folderRequest,
  intakeRequest,
  lookRequest,
  projectionsRequest,
  windowRequest,
} from "#main/http/library-shapes.ts";
import type { Ports } from "#main/http/ports.ts";
import { readJson } from "#main/http/read-body.ts";
import type { RouteHandlers } from "#main/http/route-handlers.ts";
import { LOST_HEADER } from "#shared/api/routes.ts";

/** Scans on this computer, long work, export, and the life of a window. */
export function workRoutes(ports: Ports): RouteHandlers {
  const { folders, scans, search, jobs, exports } = ports;
  const streams = new EventStreams(ports);
  return {
    listFolder: async (c) => jsonAnswer(await folders.list((await readJson(c.req.raw, folderRequest)).path)),
    lookAtScan: async (c) => jsonAnswer(await scans.look(await readJson(c.req.raw, lookRequest))),
    startProjections: async (c) => jsonAnswer(await scans.startProjections(await readJson(c.req.raw, projectionsRequest))),
    projections: async (c) => jsonAnswer(await scans.projections(id(c.req.param("job"), "path.job"))),
    startIntake: async (c) => jsonAnswer(await jobs.startIntake(await readJson(c.req.raw, intakeRequest))),
    startSearch: async (c) =>
      jsonAnswer(await search.start(id(c.req.param("specimen"), "path.specimen"), await readJson(c.req.raw, searchRequest))),
    overlooked: async (c) => jsonAnswer(await search.overlooked(await readJson(c.req.raw, overlookedRequest))),
    openDemo: async (c) => {
      await readJson(c.req.raw, emptyRequest);
      return jsonAnswer(await jobs.openDemo());
    },
    openDemoStudy: async (c) => {
      await readJson(c.req.raw, emptyRequest);
      return jsonAnswer(await jobs.openDemoStudy());
    },
    cancelJob: async (c) => {
      await readJson(c.req.raw, emptyRequest);
      await jobs.cancel(id(c.req.param("job"), "path.job"));
      return jsonAnswer({});
    },
    events: async (c) => {
      const window = windowName(c.req.query("window"), "query.window");
      // HEAD asks for the headers alone: no window is there to be counted.
      if (c.req.method === "HEAD")
        return new Response(null, { headers: { ...COMMON_HEADERS, "content-type": "application/jsonl" } });
      return streams.open(window, c.req.raw.signal);
    },
    bye: async (c) => {
      streams.close((await readJson(c.req.raw, windowRequest)).window);
      return jsonAnswer({});
    },
    exportTrees: async (c) => {
      const result = await exports.exportTrees(await readJson(c.req.raw, exportRequest));
      if (!("bytes" in result)) return jsonAnswer(result);
      return bytesAnswer(new Uint8Array(result.bytes), result.type, {
        "content-disposition": `attachment; filename*=UTF-8''${encodeURIComponent(result.name)}`,
        [LOST_HEADER]: encodeURIComponent(JSON.stringify(result.lost)),
      });
    },
  };
}
