import type { Operation } from "#shared/trees/operations.ts";

/** An operation in the log, with what the history drawer shows of it. */
export interface LoggedOperation {
  readonly seq: number;
  /** The operation that this one follows; 0 = none. */
  readonly parent: number;
  readonly t: number;
  readonly session: string;
  readonly label: string;
  readonly operation: Operation;
}

/** The way from one operation to another over their common ancestor. */
export interface Route {
  /** To take back, in this order. */
  readonly back: readonly LoggedOperation[];
  /** To apply again, in this order. */
  readonly forth: readonly LoggedOperation[];
}

type Operations = ReadonlyMap<number, LoggedOperation>;

/** Operations from the first edit to `seq`, both included; empty for 0. Complexity: length of the path. */
export function pathTo(operations: Operations, seq: number): LoggedOperation[] {
  const path: LoggedOperation[] = [];
  for (let at = operations.get(seq); at; at = operations.get(at.parent)) path.push(at);
  return path.reverse();
}

/** Route from one operation to another; 0 stands for before the first edit. Complexity: length of both paths. */
export function routeBetween(operations: Operations, from: number, to: number): Route {
  const a = pathTo(operations, from);
  const b = pathTo(operations, to);
  let shared = 0;
  while (shared < a.length && shared < b.length && a[shared]!.seq === b[shared]!.seq) shared += 1;
  return { back: a.slice(shared).reverse(), forth: b.slice(shared) };
}
