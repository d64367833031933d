declare module "@cornerstonejs/codec-openjpeg/decodewasm?url&inline" {
  /** The wasm file as a data: address. */
  const address: string;
  export default address;
}

declare module "@cornerstonejs/codec-openjpeg/decodewasmjs" {
  interface J2KDecoder {
    getEncodedBuffer(length: number): Uint8Array;
    decode(): void;
    getFrameInfo(): {
      readonly width: number;
      readonly height: number;
      readonly bitsPerSample: number;
      readonly componentCount: number;
      readonly isSigned: boolean;
    };
    getDecodedBuffer(): Uint8Array;
    delete(): void;
  }
  export default function create(options: {
    readonly wasmBinary: Uint8Array;
    print(): void;
    printErr(): void;
  }): Promise<{ readonly J2KDecoder: new () => J2KDecoder }>;
}
