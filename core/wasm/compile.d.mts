/** Folders that have a kernel/assembly/index.ts, by what the kernel does. */
export const KERNELS: Readonly<Record<"Fourier" | "decoding", URL>>;
/** A module's bytes, compiled anew from its kernel/assembly/index.ts. */
export function compiledKernel(folder: URL): Promise<Uint8Array>;
