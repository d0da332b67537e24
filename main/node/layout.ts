import { join } from "node:path";
import { TautlineError } from "#shared/errors.ts";

const ID = /^[a-z0-9][a-z0-9-]{0,63}$/;
const ALPHABET = "0123456789abcdefghjkmnpqrstvwxyz";

/** Source of random bytes; injected so that tests can repeat a run. */
export type RandomBytes = (count: number) => Uint8Array;

/** A fresh id of 20 characters (97 bits): lower-case ASCII, begins with a letter, no system's reserved word is that long. */
export function createId(random: RandomBytes): string {
  const bytes = random(20);
  const first = ALPHABET.charAt(10 + (bytes[0]! % 22));
  return first + Array.from(bytes.subarray(1), (byte) => ALPHABET.charAt(byte % 32)).join("");
}

/** The id itself when it can be a folder's name. @throws not-found: such an id is never given, so there is nothing under it. */
export function checkedId(what: string, id: string): string {
  if (!ID.test(id)) throw new TautlineError("not-found", `There is no ${what} with this id.`, { what, id: id.slice(0, 64) });
  return id;
}

/** Where each thing of a library lies. */
export interface LibraryLayout {
  readonly root: string;
  readonly lease: string;
  readonly specimens: string;
  /** What is being made; emptied at every start. */
  readonly unfinished: string;
  specimen(id: string): string;
  specimenFile(id: string): string;
  store(id: string): string;
  passes(specimen: string): string;
  pass(specimen: string, pass: string): string;
  passFile(specimen: string, pass: string): string;
  journal(specimen: string, pass: string): string;
  /** What an annotator's library knows of the assignment that a specimen is. */
  assignmentFile(specimen: string): string;
  /** Still pictures of the assignment's point rules. */
  assignmentPicture(specimen: string, picture: string): string;
  readonly studies: string;
  study(id: string): string;
  studyFile(id: string): string;
  studyPicture(id: string, picture: string): string;
  /** Returned passes as they came, by the hash of their packet. */
  studyReturn(id: string, packet: string): string;
  /** This library's key for signing packets. */
  readonly signingKey: string;
}

/** The layout of the library in folder `root`. */
export function libraryLayout(root: string): LibraryLayout {
  const specimens = join(root, "specimens");
  const specimen = (id: string) => join(specimens, checkedId("specimen", id));
  const passes = (id: string) => join(specimen(id), "passes");
  const pass = (id: string, passId: string) => join(passes(id), checkedId("pass", passId));
  const studies = join(root, "studies");
  const study = (id: string) => join(studies, checkedId("study", id));
  const picture = (name: string) => `${checkedId("picture", name)}.png`;
  return {
    root,
    lease: join(root, "lease.json"),
    specimens,
    unfinished: join(root, "unfinished"),
    specimen,
    specimenFile: (id) => join(specimen(id), "specimen.json"),
    store: (id) => join(specimen(id), "scan.ome.zarr"),
    passes,
    pass,
    passFile: (id, passId) => join(pass(id, passId), "pass.json"),
    journal: (id, passId) => join(pass(id, passId), "journal.jsonl"),
    assignmentFile: (id) => join(specimen(id), "assignment.json"),
    assignmentPicture: (id, name) => join(specimen(id), "pictures", picture(name)),
    studies,
    study,
    studyFile: (id) => join(study(id), "study.json"),
    studyPicture: (id, name) => join(study(id), "pictures", picture(name)),
    studyReturn: (id, packet) => join(study(id), "returns", checkedId("packet", packet)),
    signingKey: join(root, "signing-key.json"),
  };
}
