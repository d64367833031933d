const REPACK = "repack it (simple packing) and open that";

/** Templates of section 5 that are read (FM 92 edition 2, code table 5.0); 40000 and 40010 came before 40 and 41. */
const READ = [0, 2, 3, 4, 40, 41, 42, 40_000, 40_010];
const NAMES: Readonly<Record<number, string>> = {
  1: "matrix packing",
  50: "spectral packing",
  51: "spectral packing",
  53: "spectral packing",
  61: "logarithmic packing",
  200: "run length packing",
};

/** Why an edition 2 packing is not read, by its template number; null if it is. */
export function edition2PackingRefusal(template: number): string | null {
  if (READ.includes(template)) return null;
  const name = NAMES[template];
  return `its packing, template 5.${template}${name === undefined ? "" : ` (${name})`}, is not read; ${REPACK}`;
}

/** Why an edition 1 packing is not read, by the flags in octet 4 of section 4 (code table 11); null if it is. */
export function edition1PackingRefusal(flags: number): string | null {
  if ((flags & 0x80) !== 0) return "its values are spectral coefficients, not points of a grid";
  if ((flags & 0x40) !== 0) return `its values are in second-order packing, which is not read; ${REPACK}`;
  return null;
}
