/** The part of WebAssembly used here; its own types are not among those that a browser, a worker and Node share. */
interface Assembly {
  readonly Module: new (bytes: Uint8Array) => object;
  readonly Instance: new (module: object, imports: object) => { readonly exports: object };
}

/** A module's own memory; `buffer` is another one after it has grown. */
export interface WasmMemory {
  readonly buffer: ArrayBuffer;
  grow(pages: number): number;
}

const compiled = new Map<string, object>();

/**
 * An instance of a module, with a memory of its own; the module is compiled once.
 * @param base64 the module, see test/tools/make-wasm.mjs. @param imports functions it calls, by module and name.
 */
export function wasmInstance<Exports>(
  base64: string,
  imports: Readonly<Record<string, Readonly<Record<string, unknown>>>> = {},
): Exports {
  const { Module, Instance } = (globalThis as unknown as { readonly WebAssembly: Assembly }).WebAssembly;
  let module = compiled.get(base64);
  if (!module) {
    module = new Module(Uint8Array.from(atob(base64), (c) => c.charCodeAt(0)));
    compiled.set(base64, module);
  }
  return new Instance(module, imports).exports as Exports;
}
