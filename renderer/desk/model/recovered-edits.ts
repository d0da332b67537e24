import type { Signal } from "@preact/signals";
import type { Services } from "#renderer/app/services.ts";
import type { RecoveredEdits, RecoveredLogs } from "#renderer/storage/recovered-logs.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";

/** What of a desk these act on. */
interface RecoveredModel {
  readonly services: Pick<Services, "notices" | "goTo">;
  readonly specimen: Signal<SpecimenRecord>;
  readonly recovered: Signal<readonly RecoveredEdits[]>;
  readonly recoveredLogs: RecoveredLogs;
}

/** Looks again at what this browser set aside. */
export async function lookAtRecovered({ recovered, recoveredLogs, services }: RecoveredModel): Promise<void> {
  try {
    recovered.value = await recoveredLogs.list();
  } catch (error) {
    services.notices.failed(error);
  }
}

/** Makes a pass of its own of edits set aside, and opens it; they stay where they are when that fails. */
export async function openRecovered(model: RecoveredModel, id: number): Promise<void> {
  const { services, specimen, recoveredLogs } = model;
  try {
    const pass = await recoveredLogs.keepAsPass(id);
    services.goTo({ screen: "desk", specimen: specimen.value.id, pass: pass.id });
  } catch (error) {
    services.notices.failed(error);
  }
  await lookAtRecovered(model);
}

/** Forgets edits set aside, for good. */
export async function forgetRecovered(model: RecoveredModel, id: number): Promise<void> {
  try {
    await model.recoveredLogs.forget(id);
  } catch (error) {
    model.services.notices.failed(error);
  }
  await lookAtRecovered(model);
}
