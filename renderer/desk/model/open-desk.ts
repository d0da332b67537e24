import type { Services } from "#renderer/app/services.ts";
import type { Client } from "#renderer/client/client.ts";
import { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { lookAtRecovered } from "#renderer/desk/model/recovered-edits.ts";
import { KeptPass, WatchedPass } from "#renderer/editor/session/kept-pass.ts";
import { countOf } from "#renderer/editor/session/words.ts";
import type { LogSender } from "#renderer/storage/log-sender.ts";
import { PassStore } from "#renderer/storage/pass-store.ts";
import type { KeptBranch } from "#renderer/storage/reconcile.ts";
import { editsAmong, RecoveredLogs } from "#renderer/storage/recovered-logs.ts";
import { WindowDatabase } from "#renderer/storage/window-database.ts";
import type { PassSummary, SpecimenRecord } from "#shared/api/specimen.ts";
import { TautlineError } from "#shared/errors.ts";

/** An open desk and what ends it. */
export interface OpenDesk {
  readonly model: DeskModel;
  readonly close: () => void;
}

/** Asks the person a yes-or-no question; used while opening, when a log's two homes disagree. */
export type AskYesNo = (question: string, yes: string, no: string) => Promise<boolean>;

/** Another load of this page may have claimed the pass and be on its way out: so many tries, this far apart. */
const CLAIM_TRIES = 6;
const CLAIM_PAUSE_MS = 250;

/** Opens a pass: for writing when no other window does, else for looking on. */
export async function openDesk(services: Services, specimenId: string, passId: string, ask: AskYesNo): Promise<OpenDesk> {
  const { client, notices } = services;
  const [specimen, pass] = await facts(client, specimenId, passId);
  const sender = senderOf(client, specimenId, passId);
  const database = new WindowDatabase();
  const recoveredLogs = new RecoveredLogs(new PassStore(database, passId), sender);
  if (!(await claim(client, specimenId, passId))) {
    const keeper = await WatchedPass.open(sender);
    const model = new DeskModel({ services, specimen, pass, keeper, recoveredLogs });
    const stop = client.onEvent((event) => {
      if (event.event === "pass" && event.pass === passId) keeper.follow().catch((error: unknown) => notices.failed(error));
    });
    return {
      model,
      close: () => {
        stop();
        model.dispose();
      },
    };
  }
  // Lines may be set aside while the pass is still being opened.
  let desk: DeskModel | null = null;
  const keeper = await KeptPass.open({
    database,
    pass: passId,
    sender,
    now: () => Date.now(),
    mono: () => performance.now(),
    session: crypto.randomUUID().replaceAll("-", "").slice(0, 16),
    wait: pause,
    branchName: (t) => `edits of ${new Date(t).toLocaleString()}`,
    askRebuild: () =>
      ask(
        "The library has no journal of this pass any more, but this browser still has all of its edits. Write the journal again from here?",
        "Write it again",
        "Leave it",
      ),
    keptBranch: (branch) => tellBranch(services, specimenId, branch),
    setAside: (name, lines) => {
      if (editsAmong(lines) > 0) tellSetAside(services, name, editsAmong(lines), () => desk);
    },
  });
  const model = new DeskModel({ services, specimen, pass, keeper, recoveredLogs });
  desk = model;
  const stop = client.onConnection((state) => {
    if (state === "up") keeper.retry();
  });
  return {
    model,
    close: () => {
      stop();
      model.dispose();
      void keeper.settled().then(() => client.releasePass(specimenId, passId));
    },
  };
}

async function facts(client: Client, specimenId: string, passId: string): Promise<[SpecimenRecord, PassSummary]> {
  const shelf = await client.shelf();
  const entry = shelf.specimens.find((one) => one.specimen.id === specimenId);
  const pass = entry?.passes.find((one) => one.id === passId);
  if (entry === undefined || pass === undefined) {
    throw new TautlineError("not-found", "This pass is not in the library any more. Go back to the shelf and choose another.", {
      what: "pass",
      id: passId,
    });
  }
  return [entry.specimen, pass];
}

async function claim(client: Client, specimen: string, pass: string): Promise<boolean> {
  for (let attempt = 1; ; attempt++) {
    if ((await client.claimPass(specimen, pass)).writer) return true;
    if (attempt === CLAIM_TRIES) return false;
    await pause(CLAIM_PAUSE_MS);
  }
}

function senderOf(client: Client, specimen: string, pass: string): LogSender {
  return {
    readLog: (from) => client.readLog(specimen, pass, from),
    appendLog: (request) => client.appendLog(specimen, pass, request),
    keepBranch: async (lines, name) => (await client.keepBranch(specimen, pass, lines, name)).pass,
    rebuildLog: (lines) => client.rebuildLog(specimen, pass, lines),
  };
}

function tellBranch({ notices, goTo }: Services, specimen: string, branch: KeptBranch): void {
  notices.error(
    `This window and the library both went on with the pass since they last agreed. The library's edits are shown here; the ${branch.lines} records of this window are kept as a pass of their own (${branch.name}). Compare the two and go on with the one you want.`,
    [{ label: "Open the kept edits", run: () => goTo({ screen: "desk", specimen, pass: branch.pass.id }) }],
  );
}

function tellSetAside({ notices }: Services, name: string, edits: number, desk: () => DeskModel | null): void {
  const openMenu = () => {
    const model = desk();
    if (model !== null) model.sheet.value = "menu";
  };
  notices.error(
    `${countOf(edits, "edit")} of this window came while the pass was going on elsewhere, and could not follow it. The library does not have them; this browser keeps them as "${name}". The menu lists them: open them as a pass of their own, or forget them.`,
    [{ label: "Open the menu", run: openMenu }],
  );
  const model = desk();
  if (model !== null) void lookAtRecovered(model);
}

function pause(milliseconds: number, signal?: AbortSignal): Promise<void> {
  return new Promise((resolve) => {
    const timer = setTimeout(resolve, milliseconds);
    signal?.addEventListener(
      "abort",
      () => {
        clearTimeout(timer);
        resolve();
      },
      { once: true },
    );
  });
}
