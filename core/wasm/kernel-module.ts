import { bytesOfBase64 } from "./base64.ts";

const compiled = new Map<string, WebAssembly.Module | null>();

/** The module in a base64 text, compiled once; null where WebAssembly or its SIMD is missing. */
export function kernelModule(base64: string): WebAssembly.Module | null {
  let module = compiled.get(base64);
  if (module === undefined) {
    try {
      module = new WebAssembly.Module(bytesOfBase64(base64));
    } catch {
      module = null;
    }
    compiled.set(base64, module);
  }
  return module;
}

/** What a kernel's module exports, in a memory of its own; null where it cannot run. */
export function kernelExports<Exports>(base64: string): Exports | null {
  const module = kernelModule(base64);
  if (module === null) return null;
  return new WebAssembly.Instance(module, { env: { abort: () => undefined } }).exports as Exports;
}
