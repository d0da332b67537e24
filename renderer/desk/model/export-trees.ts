import type { NoticeAction } from "#renderer/app/notices.ts";
import { offerDownload } from "#renderer/app/offer-download.ts";
import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { type ExportFormat, LOST_HEADER } from "#shared/api/routes.ts";
import { fileFromDocument } from "#shared/formats/chordae/file-from-document.ts";
import { headerOfSpecimen } from "#shared/formats/chordae/header-of-specimen.ts";
import { graphmlLosses } from "#shared/formats/graphml/write-graphml.ts";
import { labelLosses } from "#shared/formats/labels/label-volume.ts";
import { tablesLosses } from "#shared/formats/tables/write-tables.ts";
import { vtpLosses } from "#shared/formats/vtp/write-vtp.ts";

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

/** What a format would not keep of the trees as they stand, one sentence each. */
export function lossesOf(model: DeskModel, format: ExportFormat): readonly string[] {
  const { annotator, number } = model.pass.value;
  // Time and version take no part in what is lost.
  const header = headerOfSpecimen(model.specimen.value, { annotator, pass: number, created: "", softwareVersion: "" });
  const file = fileFromDocument(model.editor.document.value, header);
  switch (format) {
    case "chordae":
      return [];
    case "graphml":
      return graphmlLosses(file);
    case "vtp":
      return vtpLosses(file);
    case "tables":
      return tablesLosses(file);
    case "labels":
      return labelLosses(file);
  }
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
    offerDownload(bytes, name, answer.headers.get("content-type") ?? "application/octet-stream");
    return { text: said(`${name} is in your downloads.`, lostOf(answer)), actions: [] };
  }
  const { written, lost } = await client.exportToPath({ ...request, path });
  const first = written[0];
  const show = first === undefined ? [] : [{ label: "Show it in its folder", run: () => void capabilities.showInFolder(first) }];
  return { text: said(`Written: ${written.join(", ")}.`, lost), actions: show };
}

function said(text: string, lost: readonly string[]): string {
  return lost.length === 0 ? text : `${text} Not kept by this format: ${lost.join(" ")}`;
}

function lostOf(answer: Response): string[] {
  const header = answer.headers.get(LOST_HEADER);
  return header === null ? [] : (JSON.parse(decodeURIComponent(header)) as string[]);
}
