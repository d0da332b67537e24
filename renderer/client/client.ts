import { type ConnectionState, keepEventStream } from "#renderer/client/event-stream.ts";
import { type Newest, NewestWins } from "#renderer/client/newest-wins.ts";
import { RequestGate } from "#renderer/client/request-gate.ts";
import { type Fetch, type Sending, sendRequest } from "#renderer/client/send-request.ts";
import { StudyRequests } from "#renderer/client/study-requests.ts";
import type {
  FilmHeader,
  FilmRequest,
  GuidePreviewAnswer,
  HistogramAnswer,
  Lane,
  SectionHeader,
  SectionRequest,
  SnapAnswer,
  SnapRequest,
  SolvedCurve,
  StripHeader,
  StripRequest,
  SurfaceHeader,
  SurfaceRequest,
  Ticket,
  ValueAnswer,
} from "#shared/api/engine.ts";
import type { FollowAnswer, FollowOpenRequest } from "#shared/api/follow.ts";
import { type BinaryFrame, decodeFrame } from "#shared/api/frame.ts";
import type { OverlookedAnswer, OverlookedRequest, SearchRequest } from "#shared/api/overlooked.ts";
import type { ProjectionsAnswer, ProjectionsRequest } from "#shared/api/projections.ts";
import type {
  AppendAnswer,
  AppendRequest,
  ExportAnswer,
  ExportRequest,
  FolderAnswer,
  HelloAnswer,
  IntakeRequest,
  LogAnswer,
  LookRequest,
  RouteName,
  ScanLookAnswer,
  ServerEvent,
  ShelfAnswer,
  SpecimenPatch,
} from "#shared/api/routes.ts";
import type { PassState, PassSummary, SpecimenRecord } from "#shared/api/specimen.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import type { ImpassableString } from "#shared/tracing/guide/impassable.ts";
import type { StrandRequest, TraceParameters } from "#shared/tracing/strand-request.ts";

type Unticketed<T> = Omit<T, "ticket">;

export interface ClientPlaces {
  readonly fetch: Fetch;
  readonly token: string;
  /** Random, one per page load; tells windows apart on the server. */
  readonly window: string;
}

/** Rank in the gate: what a hand waits for comes before what an eye waits for. */
const RANK = { log: 0, guide: 1, section: 2, plain: 3, space: 4, job: 5 } as const;

/**
 * All requests of one window, typed. Answers that a newer request made pointless come as null; every failure is a
 * `TautlineError`. At most four requests are under way; the event stream is kept beside them.
 */
export class Client {
  readonly window: string;
  private readonly gate = new RequestGate();
  private readonly newest = new NewestWins();
  private readonly eventListeners = new Set<(event: ServerEvent) => void>();
  private readonly stateListeners = new Set<(state: ConnectionState) => void>();
  private state: ConnectionState = "connecting";
  private jobNumber = 0;
  /** Lines whose newest section was asked for sharp. */
  private readonly sharp = new Set<string>();

  constructor(private readonly places: ClientPlaces) {
    this.window = places.window;
  }

  // --- library -----------------------------------------------------------------------------------------------------
  hello = (): Promise<HelloAnswer> => this.json("hello", {});
  shelf = (): Promise<ShelfAnswer> => this.json("shelf", {});
  listFolder = (path?: string): Promise<FolderAnswer> => this.json("listFolder", { body: path === undefined ? {} : { path } });
  lookAtScan = (request: LookRequest): Promise<ScanLookAnswer> => this.json("lookAtScan", { body: request });
  startProjections = (request: ProjectionsRequest): Promise<{ job: string }> => this.json("startProjections", { body: request });
  projections = (job: string): Promise<ProjectionsAnswer> => this.json("projections", { params: { job } });
  startIntake = (request: IntakeRequest): Promise<{ job: string }> => this.json("startIntake", { body: request });
  openDemo = (): Promise<{ job: string }> => this.json("openDemo", { body: {} });
  openDemoStudy = (): Promise<{ job: string }> => this.json("openDemoStudy", { body: {} });
  cancelJob = (job: string): Promise<unknown> => this.json("cancelJob", { params: { job }, body: {} });
  specimen = (specimen: string): Promise<SpecimenRecord> => this.json("specimen", { params: { specimen } });
  changeSpecimen = (specimen: string, patch: SpecimenPatch): Promise<SpecimenRecord> =>
    this.json("changeSpecimen", { params: { specimen }, body: patch });
  removeSpecimen = (specimen: string, force = false): Promise<unknown> =>
    this.json("removeSpecimen", { params: { specimen }, body: { force } });
  picture = (specimen: string): Promise<BinaryFrame<SectionHeader>> => this.frame("picture", { params: { specimen } });

  // --- studies, packets, assignments ---------------------------------------------------------------------------------
  readonly studies = new StudyRequests({
    json: (name, sending) => this.json(name, sending),
    blob: (name, sending) =>
      this.gate.pass(RANK.plain, async () => (await sendRequest(this.places.fetch, this.places.token, name, sending)).blob()),
  });

  // --- passes ------------------------------------------------------------------------------------------------------
  createPass = (specimen: string, annotator: string): Promise<PassSummary> =>
    this.json("createPass", { params: { specimen }, body: { annotator } });
  readLog = (specimen: string, pass: string, from = 0): Promise<LogAnswer> =>
    this.json("readLog", { params: { specimen, pass }, query: { from: String(from) } }, RANK.log);
  appendLog = (specimen: string, pass: string, request: Omit<AppendRequest, "window">): Promise<AppendAnswer> =>
    this.json("appendLog", { params: { specimen, pass }, body: { window: this.window, ...request } }, RANK.log);
  keepBranch = (specimen: string, pass: string, lines: readonly string[], name: string): Promise<{ pass: PassSummary }> =>
    this.json("keepBranch", { params: { specimen, pass }, body: { lines, name } }, RANK.log);
  rebuildLog = (specimen: string, pass: string, lines: readonly string[]): Promise<AppendAnswer> =>
    this.json("rebuildLog", { params: { specimen, pass }, body: { lines } }, RANK.log);
  claimPass = (specimen: string, pass: string): Promise<{ writer: boolean }> =>
    this.json("claimPass", { params: { specimen, pass }, body: { window: this.window } });
  releasePass = (specimen: string, pass: string): Promise<unknown> =>
    this.json("releasePass", { params: { specimen, pass }, body: { window: this.window }, keepalive: true });
  setPassState = (specimen: string, pass: string, state: PassState): Promise<PassSummary> =>
    this.json("finishPass", { params: { specimen, pass }, body: { state } });

  // --- engine: null = a newer request of the same line took over -----------------------------------------------------
  /** @param line which pane asks; each has its own order. */
  section(request: Unticketed<SectionRequest>, line = "section"): Newest<BinaryFrame<SectionHeader>> {
    const moving = request.quality === "moving";
    // A sharp picture of a plane that was left is not waited for.
    const atOnce = moving && this.sharp.has(line);
    if (moving) this.sharp.delete(line);
    else this.sharp.add(line);
    return this.inLine(
      "section",
      line,
      (ticket) => this.frame("section", { body: { ticket, ...request } }, RANK.section),
      atOnce,
    );
  }
  strip(request: Unticketed<StripRequest>): Newest<BinaryFrame<StripHeader>> {
    return this.inLine("section", "strip", (ticket) => this.frame("strip", { body: { ticket, ...request } }, RANK.space));
  }
  film(request: Unticketed<FilmRequest>): Newest<BinaryFrame<FilmHeader>> {
    return this.inLine("section", "film", (ticket) => this.frame("film", { body: { ticket, ...request } }, RANK.space));
  }
  surface(request: Unticketed<SurfaceRequest>): Newest<BinaryFrame<SurfaceHeader>> {
    return this.inLine("space", "surface", (ticket) => this.frame("surface", { body: { ticket, ...request } }, RANK.space));
  }
  value(specimen: string, at: PointMm): Newest<ValueAnswer> {
    return this.newest.run("value", () => this.json("value", { body: { specimen, at } }, RANK.plain));
  }
  histogram = (specimen: string): Promise<HistogramAnswer> => this.json("histogram", { body: { specimen } });
  snap(request: Unticketed<SnapRequest>): Newest<SnapAnswer> {
    return this.inLine("guide", "snap", (ticket) => this.json("snap", { body: { ticket, ...request } }, RANK.guide));
  }
  openGuide(
    specimen: string,
    from: PointMm,
    parameters: TraceParameters,
    impassable: readonly ImpassableString[] = [],
  ): Newest<{ session: string }> {
    const send = (ticket: Ticket) =>
      this.json<{ session: string }>("openGuide", { body: { ticket, specimen, from, parameters, impassable } }, RANK.guide);
    return this.inLine("guide", "guide open", send, true);
  }
  previewGuide(session: string, to: PointMm): Newest<GuidePreviewAnswer> {
    return this.inLine("guide", "guide preview", (ticket) =>
      this.json("previewGuide", { body: { ticket, session, to } }, RANK.guide),
    );
  }
  closeGuide = (session: string): Promise<unknown> => this.json("closeGuide", { body: { session } }, RANK.plain);
  /** A proposal of the whole string through a place; asked on with `moreFollow` until it is done. */
  openFollow(request: Unticketed<FollowOpenRequest>): Newest<{ session: string }> {
    return this.inLine(
      "guide",
      "follow open",
      (ticket) => this.json("openFollow", { body: { ticket, ...request } }, RANK.guide),
      true,
    );
  }
  moreFollow(session: string): Newest<FollowAnswer> {
    return this.inLine("guide", "follow more", (ticket) => this.json("moreFollow", { body: { ticket, session } }, RANK.guide));
  }
  closeFollow = (session: string): Promise<unknown> => this.json("closeFollow", { body: { session } }, RANK.plain);
  /** What no strand of a pass explains, from what was searched so far. */
  overlooked(request: OverlookedRequest): Newest<OverlookedAnswer> {
    return this.newest.run("overlooked", () => this.json("overlooked", { body: request }, RANK.plain));
  }
  /** Starts the search of a scan for strings, or goes on with it. */
  startSearch = (specimen: string, request: SearchRequest): Promise<{ job: string }> =>
    this.json("startSearch", { params: { specimen }, body: request });
  /** Committed curves. Never superseded: each call stands in a line of its own. */
  solve(
    specimen: string,
    strands: readonly StrandRequest[],
    parameters: TraceParameters,
    signal?: AbortSignal,
  ): Promise<{ curves: readonly SolvedCurve[] }> {
    this.jobNumber += 1;
    const ticket: Ticket = { window: `${this.window}-solve-${this.jobNumber}`, lane: "job", number: this.jobNumber };
    const body = { ticket, specimen, strands, parameters };
    return this.json("solve", signal === undefined ? { body } : { body, signal }, RANK.guide);
  }

  // --- out ---------------------------------------------------------------------------------------------------------
  exportToPath = (request: ExportRequest & { path: string }): Promise<ExportAnswer> =>
    this.json("exportTrees", { body: request }, RANK.job);
  /** The file's bytes for the page to offer as a download. */
  async exportBytes(request: Omit<ExportRequest, "path">): Promise<{ bytes: Uint8Array<ArrayBuffer>; answer: Response }> {
    return this.gate.pass(RANK.job, async () => {
      const answer = await sendRequest(this.places.fetch, this.places.token, "exportTrees", { body: request });
      return { bytes: new Uint8Array(await answer.arrayBuffer()), answer };
    });
  }

  // --- the window itself ---------------------------------------------------------------------------------------------
  /** Tells the server that this page closes; called from `pagehide`. */
  bye(): void {
    const sending: Sending = { body: { window: this.window }, keepalive: true };
    void sendRequest(this.places.fetch, this.places.token, "bye", sending).catch(() => undefined);
  }

  onEvent(listener: (event: ServerEvent) => void): () => void {
    this.eventListeners.add(listener);
    return () => this.eventListeners.delete(listener);
  }

  /** Calls `listener` now and at each change of the connection. */
  onConnection(listener: (state: ConnectionState) => void): () => void {
    this.stateListeners.add(listener);
    listener(this.state);
    return () => this.stateListeners.delete(listener);
  }

  /** Opens the event stream; the returned function closes it. */
  connect(): () => void {
    return keepEventStream({
      open: async (signal) => {
        const sending: Sending = { query: { window: this.window }, signal };
        const answer = await sendRequest(this.places.fetch, this.places.token, "events", sending);
        return answer.body!;
      },
      onEvent: (event) => {
        for (const listener of this.eventListeners) listener(event);
      },
      onState: (state) => {
        if (state === this.state) return;
        this.state = state;
        for (const listener of this.stateListeners) listener(state);
      },
      setTimer: (action, ms) => setTimeout(action, ms),
      clearTimer: (timer) => clearTimeout(timer as number),
    });
  }

  private inLine<T>(lane: Lane, line: string, send: (ticket: Ticket) => Promise<T>, atOnce = false): Newest<T> {
    // Lines of one lane must not supersede each other on the server, so each is a window of its own there.
    return this.newest.run(
      line,
      (number) => send({ window: `${this.window}-${line.replaceAll(" ", "-")}`, lane, number }),
      atOnce,
    );
  }

  private json<T>(name: RouteName, sending: Sending, rank: number = RANK.plain): Promise<T> {
    return this.gate.pass(rank, async () => {
      const answer = await sendRequest(this.places.fetch, this.places.token, name, sending);
      return (await answer.json()) as T;
    });
  }

  private frame<Header>(name: RouteName, sending: Sending, rank: number = RANK.plain): Promise<BinaryFrame<Header>> {
    return this.gate.pass(rank, async () => {
      const answer = await sendRequest(this.places.fetch, this.places.token, name, sending);
      return decodeFrame<Header>(new Uint8Array(await answer.arrayBuffer()));
    });
  }
}
