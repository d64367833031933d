import { parentPort } from "node:worker_threads";
import { LIBRARIES } from "../../../../app/codecs/libraries.ts";
import { openNetcdf4 } from "../../../../core/formats/hdf5/netcdf4-store.ts";
import { memorySource } from "../../../../core/formats/memory-source.ts";

/** What became of a file: its numbers, as far as they were read, and the errors in words. */
export interface Reading {
  readonly opened: boolean;
  readonly numbers: Readonly<Record<string, number[]>>;
  readonly errors: readonly { readonly name: string; readonly message: string }[];
  readonly megabytes: number;
}

/** Open a file and read a corner of every variable. */
async function reading(bytes: Uint8Array): Promise<Reading> {
  const errors: { name: string; message: string }[] = [];
  const numbers: Record<string, number[]> = {};
  let opened = false;
  const told = (error: unknown): number => {
    const { name, message } = error as Error;
    return errors.push({ name, message });
  };
  try {
    const store = await openNetcdf4(memorySource("mutated.nc", bytes), await LIBRARIES.hdf5());
    opened = true;
    for (const { name, shape, type } of store.variables) {
      if (type === "char") continue;
      const start = shape.map(() => 0);
      const count = shape.map((n) => Math.min(n, 4));
      await store.readNumbers(name, start, count).then((read) => (numbers[name] = [...read.slice(0, 4)]), told);
    }
    await store.close();
  } catch (error) {
    told(error);
  }
  return { opened, numbers, errors, megabytes: process.memoryUsage().rss / 2 ** 20 };
}

parentPort?.on("message", (bytes: Uint8Array) => void reading(bytes).then((found) => parentPort?.postMessage(found)));
