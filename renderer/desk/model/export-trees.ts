import type { NoticeAction } from "#renderer/app/notices.ts";
import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { type ExportFormat, LOST_HEADER } from "#shared/api/routes.ts";

const ENDINGS: Readonly<Record<ExportFormat, string>> = {
  chordae: ".chordae.json",
  graphml: ".graphml",
  vtp: ".vtp",
  tables: ".zip",
  labels: ".nrrd",
};

/** A plain file name for a pass in a format. */
export function exportFileName(model: DeskModel, format: ExportFormat): string {
  const { annotator, number } = model.pass.value;
  const plain = `${model.specimen.value.name}-${annotator}-pass-${number}`.replace(/[^\p{L}\p{N}._-]+/gu, "-");
  return `${plain}${ENDINGS[format]}`;
}

/** Writes the trees as the journal has them, once every edit is there. Null when the person changed their mind. */
export async function exportTrees(
  model: DeskModel,
  format: ExportFormat,
): Promise<{ readonly text: string; readonly actions: readonly NoticeAction[] } | null> {
  const { client, capabilities } = model.services;
  const request = { specimen: model.specimen.value.id, pass: model.pass.value.id, format };
  await model.editor.settled();
  await model.editor.keeper.settled();
  const name = exportFileName(model, format);
  const path = await capabilities.pickSavePath(name);
  if (path === null) return null;
  if (path === "download") {
    const { bytes, answer } = await client.exportBytes(request);
    offer(bytes, name, answer.headers.get("content-type") ?? "application/octet-stream");
    return { text: said(`${name} is in your downloads.`, lostOf(answer)), actions: [] };
  }
  const { written, lost } = await client.exportToPath({ ...request, path });
  const first = written[0];
  const show = first === undefined ? [] : [{ label: "Show it in its folder", run: () => void capabilities.showInFolder(first) }];
  return { text: said(`Written: ${written.join(", ")}.`, lost), actions: show };
}

function said(text: string, lost: readonly string[]): string {
  return lost.length === 0 ? text : `${text} Not carried by this format: ${lost.join("; ")}.`;
}

function lostOf(answer: Response): string[] {
  const header = answer.headers.get(LOST_HEADER);
  return header === null ? [] : (JSON.parse(decodeURIComponent(header)) as string[]);
}

function offer(bytes: Uint8Array<ArrayBuffer>, name: string, type: string): void {
  const url = URL.createObjectURL(new Blob([bytes], { type }));
  const link = document.createElement("a");
  link.href = url;
  link.download = name;
  link.click();
  setTimeout(() => URL.revokeObjectURL(url), 60_000);
}
