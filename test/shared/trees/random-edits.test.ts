import { describe, expect, it } from "vitest";
import { PassHistory, type Stamp } from "#shared/log/history.ts";
import { historyFromSnapshot, snapshotOf } from "#shared/log/snapshot.ts";
import { adjacencyOf } from "#shared/trees/adjacency.ts";
import type { TreeDocument } from "#shared/trees/document.ts";
import { brokenInvariants } from "#shared/trees/invariants.ts";
import type { Operation } from "#shared/trees/operations.ts";
import { canonicalFaults } from "./canonical-faults.ts";
import { drawn } from "./drawn-curve.ts";
import { EDITS, seededEdit } from "./seeded-edits.ts";
import { pick, seeded } from "./seeded-random.ts";

// The slow model: every state ever reached, as plain text by operation, and every place the history stood at, in order.
// Written without the program's fold, routes or indexes. Source: own derivation from the definition of undo and redo.
class SlowModel {
  readonly states = new Map<number, string>([[0, "{}"]]);
  readonly parents = new Map<number, number>();
  readonly visits: number[] = [0];

  get at(): number {
    return this.visits[this.visits.length - 1]!;
  }

  commit(seq: number, operation: Operation): void {
    const records = JSON.parse(this.states.get(this.at)!) as Record<string, unknown>;
    for (const change of operation.changes) {
      const key = change.table === "landmarks" ? "landmarks" : `${change.table} ${change.id}`;
      if (change.to === null) delete records[key];
      else records[key] = change.to;
    }
    this.states.set(seq, JSON.stringify(records));
    this.parents.set(seq, this.at);
    this.visits.push(seq);
  }

  /** Redo, by its definition: from the latest visit below this point, the step that leads there. */
  redoTarget(): number | null {
    for (let i = this.visits.length - 1; i >= 0; i--) {
      let step = this.visits[i]!;
      while (step !== 0) {
        if (this.parents.get(step) === this.at) return step;
        step = this.parents.get(step)!;
      }
    }
    return null;
  }
}

function plain(document: TreeDocument): Record<string, unknown> {
  const records: Record<string, unknown> = {};
  const tables = {
    tree: document.trees,
    node: document.nodes,
    strand: document.strands,
    "cross-link": document.crossLinks,
    dismissal: document.dismissals,
  };
  for (const [word, table] of Object.entries(tables)) for (const [id, record] of table) records[`${word} ${id}`] = record;
  if (Object.keys(document.landmarks).length > 0) records.landmarks = document.landmarks;
  return JSON.parse(JSON.stringify(records)) as Record<string, unknown>;
}

function run(seed: number, steps: number, onEdit: (name: string) => void) {
  const random = seeded(seed);
  let mono = 0;
  const stamp = (): Stamp => {
    mono += 900;
    return { t: 1_800_000_000_000 + mono, mono, session: "w" };
  };
  const begun = PassHistory.begin({ pass: "p", specimen: "s", annotator: "AN-1", number: 1, epoch: "e" }, stamp());
  const { history, lines } = begun;
  const model = new SlowModel();
  const trail: string[] = [];
  const compare = () => {
    const where = `seed ${seed}: ${trail.slice(-6).join(", ")}`;
    expect(plain(history.document), where).toEqual(JSON.parse(model.states.get(model.at)!));
    expect(history.pointer, where).toBe(model.at);
    expect(history.canRedo, where).toBe(model.redoTarget() !== null);
  };
  for (let step = 0; step < steps; step++) {
    const dice = random();
    if (dice < 0.08) {
      lines.push(...history.undo(stamp()));
      trail.push("undo");
      if (model.at !== 0) model.visits.push(model.parents.get(model.at)!);
    } else if (dice < 0.13) {
      const target = model.redoTarget();
      lines.push(...history.redo(stamp()));
      trail.push("redo");
      if (target !== null) model.visits.push(target);
    } else if (dice < 0.15) {
      const target = pick(random, [...model.states.keys()])!;
      lines.push(...history.jump(target, stamp()));
      trail.push(`jump ${target}`);
      if (target !== model.at) model.visits.push(target);
    } else {
      const ids = history.ids();
      const edit = seededEdit(history.document, ids, random);
      if (!edit) continue;
      const { operation, curves } = drawn(edit.plan, ids);
      const written = history.commit(operation, edit.name, curves, stamp());
      lines.push(...written);
      trail.push(edit.name);
      onEdit(edit.name);
      if (written.length > 0) model.commit(history.pointer, operation);
      const faults = [...brokenInvariants(history.document), ...canonicalFaults(history.document)];
      expect(faults, `seed ${seed}, step ${step}: ${trail.slice(-6).join(", ")}`).toEqual([]);
    }
    compare();
  }
  return { history, lines, model, stamp, trail };
}

// A longer hunt: TAUTLINE_SEEDS=1000-1400 npx vitest run test/shared/trees/random-edits.test.ts
const [firstSeed = 1, lastSeed = 14] = (process.env.TAUTLINE_SEEDS ?? "").split("-").filter(Boolean).map(Number);
const seeds = Array.from({ length: lastSeed - firstSeed + 1 }, (_, i) => firstSeed + i);

describe("random sequences of 250 edits each", () => {
  const made = new Map<string, number>();

  it.each(seeds)("seed %i: every state equals the slow model's, and every document is sound", (seed) => {
    const { history, lines, model, stamp } = run(seed, 250, (name) => made.set(name, (made.get(name) ?? 0) + 1));

    // A fresh reading of the lines says the same.
    const again = PassHistory.fromLines(lines);
    expect(again.document).toEqual(history.document);
    expect(again.entries()).toEqual(history.entries());
    expect(again.workMs).toBe(history.workMs);

    // The index of the last document equals one rebuilt from nothing.
    expect(adjacencyOf(history.document)).toEqual(adjacencyOf({ ...again.document }));

    // Undo all, redo all, and a jump to every operation ever made.
    const end = history.document;
    const pointer = history.pointer;
    while (again.canUndo) again.undo(stamp());
    expect(plain(again.document)).toEqual({});
    while (again.pointer !== pointer) expect(again.redo(stamp())).toHaveLength(1);
    expect({ ...again.document, curves: 0 }).toEqual({ ...end, curves: 0 });
    for (const [seq, state] of model.states) {
      again.jump(seq, stamp());
      expect(plain(again.document)).toEqual(JSON.parse(state));
    }
  });

  it("made every kind of edit", () => {
    for (const name of Object.keys(EDITS)) expect(made.get(name) ?? 0, name).toBeGreaterThan(0);
  });

  it("a snapshot taken anywhere, with the lines after it, says what the whole log says", () => {
    const { lines } = run(99, 200, () => {});
    const whole = PassHistory.fromLines(lines);
    for (const at of [1, 57, 200, lines.length]) {
      const snapshot: unknown = JSON.parse(JSON.stringify(snapshotOf(PassHistory.fromLines(lines.slice(0, at)))));
      expect(historyFromSnapshot(snapshot, lines.slice(at)).state).toEqual(whole.state);
    }
  });
});
