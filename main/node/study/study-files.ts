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
  const { refusal, passes, protocol } = analysisAnswer(study);
  if (refusal !== null || protocol === null) {
    const sentence = refusal ?? "The protocol is not frozen.";
    throw new TautlineError("conflict", sentence, {
      what: "analysis",
      expected: "a frozen protocol and passes",
      found: sentence,
    });
  }
  const files: StudyFile[] = [];
  for (const { assignment, specimen: id, annotator, pass } of passes) {
    const { returned } = study.assignments.find((one) => one.id === assignment)!;
    const specimen = await library.specimen(id);
    const history = await library.passes.history(id, returned!.pass);
    // The time of the last record, by the annotator's clock: the days between repeats are counted by one clock.
    const created = new Date(history.changed).toISOString();
    const header = {
      ...headerOfSpecimen(specimen, { annotator, pass, created, softwareVersion }),
      protocol: { id: study.id, version: protocol.version, sha256: protocol.sha256 },
    };
    const name = `${[specimen.name, annotator, String(pass)].map(plainName).join("-")}.chordae.json`;
    files.push({ name, file: fileFromDocument(history.document, header) });
  }
  return files;
}

function plainName(name: string): string {
  return name.replace(/[^\p{L}\p{N}.]+/gu, "-").replace(/^[.-]+|[.-]+$/g, "") || "unnamed";
}
