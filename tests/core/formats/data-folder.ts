import { fileURLToPath } from "node:url";

/** A file of real data: beside the project, or where ISOHYPSE_DATA says. It may be absent. */
export function dataFile(name: string): string {
  const folder = process.env.ISOHYPSE_DATA ?? fileURLToPath(new URL("../../../../shared/data", import.meta.url));
  return `${folder}/${name}`;
}
