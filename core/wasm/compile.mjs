// Compiles the kernels: `npm run kernel` writes each one's kernel.generated.ts; imported, it gives the bytes to whoever asks.
import { readFile, writeFile } from "node:fs/promises";
import { fileURLToPath } from "node:url";
import asc from "assemblyscript/asc";

const OPTIONS = [
  "index.ts",
  "--outFile",
  "kernel.wasm",
  "--runtime",
  "stub",
  "--enable",
  "simd",
  "--optimizeLevel",
  "3",
  "--converge",
  "--noAssert",
  "--initialMemory",
  "1",
];

/** Folders that have a kernel/assembly/index.ts, by what the kernel does. */
export const KERNELS = {
  Fourier: new URL("../transforms/fourier/", import.meta.url),
  decoding: new URL("../formats/netcdf/", import.meta.url),
};

/** A module's bytes, compiled anew from its kernel/assembly/index.ts. */
export async function compiledKernel(folder) {
  const source = await readFile(new URL("kernel/assembly/index.ts", folder), "utf8");
  let bytes = null;
  const { error, stderr } = await asc.main(OPTIONS, {
    readFile: (name) => (name === "index.ts" ? source : null),
    writeFile: (name, contents) => {
      if (name === "kernel.wasm") bytes = contents;
    },
    listFiles: () => [],
  });
  if (error || bytes === null) throw new Error(`The kernel does not compile: ${stderr?.toString() ?? error}`);
  return bytes;
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  for (const [what, folder] of Object.entries(KERNELS)) {
    const text = Buffer.from(await compiledKernel(folder)).toString("base64");
    const lines = text.match(/.{1,140}/g).map((line) => `  "${line}",`);
    await writeFile(
      new URL("kernel.generated.ts", folder),
      `// Made by \`npm run kernel\` from kernel/assembly; a test compiles it anew and compares.\n\n/** The ${what} kernel's WebAssembly module, base64. */\nexport const KERNEL = [\n${lines.join("\n")}\n].join("");\n`,
    );
  }
}
