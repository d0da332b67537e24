import type { Library } from "#main/node/library.ts";
import type { StudyFile } from "#shared/agreement/study/study.ts";
import { TautlineError } from "#shared/errors.ts";
import { fileFromDocument } from "#shared/formats/chordae/file-from-document.ts";
import { headerOfSpecimen } from "#shared/formats/chordae/header-of-specimen.ts";
import type { StudyRecord } from "#shared/study/study-record.ts";
import { analysisAnswer } from "#shared/study/study-view.ts";

/**
 * The passes of a study that count, as tree files in the true frame with annotator, pass and protocol: what the agreement is
 * made of. Names are `<specimen>-<annotator>-<pass>.chordae.json`, letters, digits, dots and hyphens only.
 * @throws conflict while the analysis is refused, with the sentence why
 */
export async function studyFiles(library: Library, study: StudyRecord, softwareVersion: string): Promise<StudyFile[]> {
  const { refusal, passes } = analysisAnswer(study);
  if (refusal !== null)
    throw new TautlineError("conflict", refusal, { what: "analysis", expected: "a frozen protocol and passes", found: refusal });
  const files: StudyFile[] = [];
  for (const { assignment, specimen: id, annotator, pass } of passes) {
    const { returned } = study.assignments.find((one) => one.id === assignment)!;
    const specimen = await library.specimen(id);
    const history = await library.passes.history(id, returned!.pass);
    // The time of the last record, by the annotator's clock: the days between repeats are counted by one clock.
    const created = new Date(history.changed).toISOString();
    const header = {
      ...headerOfSpecimen(specimen, { annotator, pass, created, softwareVersion }),
      protocol: drawnUnder(study, returned!.protocolVersion),
    };
    const stem = [specimen.name, annotator, String(pass)].map(plainName).join("-");
    // Two specimens may go by one name.
    const taken = files.some((one) => one.name === `${stem}.chordae.json`);
    const name = `${taken ? `${stem}-${plainName(id)}` : stem}.chordae.json`;
    files.push({ name, file: fileFromDocument(history.document, header) });
  }
  return files;
}

function drawnUnder({ id, protocols }: StudyRecord, version: number) {
  return { id, version, sha256: protocols.find((one) => one.version === version)?.frozen?.sha256 ?? "" };
}

function plainName(name: string): string {
  return name.replace(/[^\p{L}\p{N}.]+/gu, "-").replace(/^[.-]+|[.-]+$/g, "") || "unnamed";
}
