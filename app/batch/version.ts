import { version } from "../../package.json";

/** Name and version, as they stand in every result's provenance. */
export const PROGRAM = `Isohypse ${version}`;
