/** The Fourier kernel, compiled anew from its source. */
export function compiledKernel(): Promise<Uint8Array>;
