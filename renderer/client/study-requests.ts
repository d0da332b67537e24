import type { Sending } from "#renderer/client/send-request.ts";
import type { ExportAnswer, RouteName } from "#shared/api/routes.ts";
import type {
  AnalysisAnswer,
  AssignmentView,
  PacketLook,
  PacketRequest,
  ReturnRequest,
  SignatureAnswer,
  StudiesAnswer,
  StudyDraft,
  StudyPassesAnswer,
  StudyPatch,
  StudyView,
  TakeInRequest,
} from "#shared/api/study.ts";
import type { ProtocolContent } from "#shared/study/protocol.ts";

type Job = Promise<{ job: string }>;

/** How requests of studies are sent; the window's client does it. */
export interface StudySender {
  json<T>(name: RouteName, sending: Sending): Promise<T>;
  blob(name: RouteName, sending: Sending): Promise<Blob>;
}

/** All requests on studies, packets and assignments, typed. Long acts answer with a job, whose end comes as an event. */
export class StudyRequests {
  constructor(private readonly sender: StudySender) {}

  // --- the lead's library --------------------------------------------------------------------------------------------
  all = (): Promise<StudiesAnswer> => this.sender.json("studies", {});
  create = (draft: StudyDraft): Promise<StudyView> => this.sender.json("createStudy", { body: draft });
  one = (study: string): Promise<StudyView> => this.sender.json("study", { params: { study } });
  change = (study: string, patch: StudyPatch): Promise<StudyView> =>
    this.sender.json("changeStudy", { params: { study }, body: patch });
  remove = (study: string): Promise<unknown> => this.sender.json("removeStudy", { params: { study }, body: {} });
  changeProtocol = (study: string, content: ProtocolContent): Promise<StudyView> =>
    this.sender.json("changeProtocol", { params: { study }, body: { content } });
  freezeProtocol = (study: string): Promise<StudyView> => this.sender.json("freezeProtocol", { params: { study }, body: {} });
  reviseProtocol = (study: string, reason: string): Promise<StudyView> =>
    this.sender.json("reviseProtocol", { params: { study }, body: { reason } });
  addPicture = (study: string, png: Blob): Promise<{ picture: string }> =>
    this.sender.json("addPicture", { params: { study }, bytes: png });
  picture = (study: string, picture: string): Promise<Blob> => this.sender.blob("studyPicture", { params: { study, picture } });
  makePackets = (study: string, request: PacketRequest): Job =>
    this.sender.json("makePackets", { params: { study }, body: request });
  setAside = (study: string, assignment: string, reason: string): Promise<StudyView> =>
    this.sender.json("setAsidePass", { params: { study, assignment }, body: { reason } });
  analysis = (study: string): Promise<AnalysisAnswer> => this.sender.json("studyAnalysis", { params: { study } });
  passes = (study: string): Promise<StudyPassesAnswer> => this.sender.json("studyPasses", { params: { study } });
  exportPasses = (study: string, folder: string): Promise<ExportAnswer> =>
    this.sender.json("exportPasses", { params: { study }, body: { folder } });

  // --- packets, in either library ------------------------------------------------------------------------------------
  look = (path: string): Promise<PacketLook> => this.sender.json("lookAtPacket", { body: { path } });
  takeIn = (request: TakeInRequest): Job => this.sender.json("takeInPacket", { body: request });
  signature = (): Promise<SignatureAnswer> => this.sender.json("signature", {});

  // --- the annotator's library ---------------------------------------------------------------------------------------
  assignment = (specimen: string): Promise<AssignmentView> => this.sender.json("assignment", { params: { specimen } });
  assignmentPicture = (specimen: string, picture: string): Promise<Blob> =>
    this.sender.blob("assignmentPicture", { params: { specimen, picture } });
  makeReturn = (specimen: string, request: ReturnRequest): Job =>
    this.sender.json("makeReturn", { params: { specimen }, body: request });
  reopen = (specimen: string): Promise<AssignmentView> =>
    this.sender.json("reopenAssignment", { params: { specimen }, body: {} });
}
