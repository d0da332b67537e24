import type { Context } from "hono";
import { bytesAnswer, jsonAnswer } from "#main/http/answers.ts";
import { id } from "#main/http/engine-shapes.ts";
import { emptyRequest, lookRequest } from "#main/http/library-shapes.ts";
import type { Ports } from "#main/http/ports.ts";
import { readBytes, readJson } from "#main/http/read-body.ts";
import type { RouteHandlers } from "#main/http/route-handlers.ts";
import {
  exportPassesRequest,
  packetRequest,
  pictureName,
  protocolRequest,
  returnRequest,
  reviseRequest,
  setAsideRequest,
  studyDraft,
  studyPatch,
  takeInRequest,
} from "#main/http/study-shapes.ts";

/** Largest still picture of a point rule, bytes. */
const PICTURE_LIMIT_BYTES = 4 * 1024 * 1024;

/** Studies, packets and assignments. */
export function studyRoutes({ studies, packets }: Ports): RouteHandlers {
  const studyOf = (c: Context) => id(c.req.param("study"), "path.study");
  const specimenOf = (c: Context) => id(c.req.param("specimen"), "path.specimen");
  const pictureOf = (c: Context) => pictureName(c.req.param("picture"), "path.picture");
  const png = (bytes: Uint8Array) => bytesAnswer(new Uint8Array(bytes), "image/png");
  return {
    studies: async () => jsonAnswer(await studies.studies()),
    createStudy: async (c) => jsonAnswer(await studies.create(await readJson(c.req.raw, studyDraft))),
    study: async (c) => jsonAnswer(await studies.study(studyOf(c))),
    changeStudy: async (c) => jsonAnswer(await studies.change(studyOf(c), await readJson(c.req.raw, studyPatch))),
    removeStudy: async (c) => {
      await readJson(c.req.raw, emptyRequest);
      await studies.remove(studyOf(c));
      return jsonAnswer({});
    },
    changeProtocol: async (c) => jsonAnswer(await studies.changeProtocol(studyOf(c), await readJson(c.req.raw, protocolRequest))),
    freezeProtocol: async (c) => {
      await readJson(c.req.raw, emptyRequest);
      return jsonAnswer(await studies.freezeProtocol(studyOf(c)));
    },
    reviseProtocol: async (c) => jsonAnswer(await studies.reviseProtocol(studyOf(c), await readJson(c.req.raw, reviseRequest))),
    addPicture: async (c) => jsonAnswer(await studies.addPicture(studyOf(c), await readBytes(c.req.raw, PICTURE_LIMIT_BYTES))),
    studyPicture: async (c) => png(await studies.picture(studyOf(c), pictureOf(c))),
    makePackets: async (c) => jsonAnswer(await studies.makePackets(studyOf(c), await readJson(c.req.raw, packetRequest))),
    setAsidePass: async (c) => {
      const request = await readJson(c.req.raw, setAsideRequest);
      return jsonAnswer(await studies.setAside(studyOf(c), id(c.req.param("assignment"), "path.assignment"), request));
    },
    studyAnalysis: async (c) => jsonAnswer(await studies.analysis(studyOf(c))),
    studyPasses: async (c) => jsonAnswer(await studies.passes(studyOf(c))),
    exportPasses: async (c) => jsonAnswer(await studies.exportPasses(studyOf(c), await readJson(c.req.raw, exportPassesRequest))),
    lookAtPacket: async (c) => jsonAnswer(await packets.look((await readJson(c.req.raw, lookRequest)).path)),
    takeInPacket: async (c) => jsonAnswer(await packets.takeIn(await readJson(c.req.raw, takeInRequest))),
    signature: async () => jsonAnswer(await packets.signature()),
    assignment: async (c) => jsonAnswer(await packets.assignment(specimenOf(c))),
    assignmentPicture: async (c) => png(await packets.assignmentPicture(specimenOf(c), pictureOf(c))),
    makeReturn: async (c) => jsonAnswer(await packets.makeReturn(specimenOf(c), await readJson(c.req.raw, returnRequest))),
    reopenAssignment: async (c) => {
      await readJson(c.req.raw, emptyRequest);
      return jsonAnswer(await packets.reopen(specimenOf(c)));
    },
  };
}
