import type { Hdf5Dataset, Hdf5File } from "../libraries.ts";

/** How netCDF marks a scale that is a dimension without values of its own (NetCDF-4 format specification, "Dimension scales"). */
const BARE_DIMENSION = /^This is a netCDF dimension but not a netCDF variable/;
/** How it names a variable that has a dimension's name without being its coordinate. */
const NON_COORDINATE = /^_nc4_non_coord_/;

/** A dataset's name as netCDF sees it: without the root's slash, `group/name` below. */
export function variableName(path: string): string {
  const parts = path.replace(/^\/+/, "").split("/");
  const last = (parts.pop() ?? "").replace(NON_COORDINATE, "");
  return [...parts, last].join("/");
}

/** True for a scale that only stands for a dimension. */
export function isBareDimension({ attributes }: Hdf5Dataset): boolean {
  return typeof attributes.NAME === "string" && BARE_DIMENSION.test(attributes.NAME);
}

/** The scales that bear dimensions' numbers, by number. */
function scalesById(all: readonly Hdf5Dataset[]): ReadonlyMap<number, string> {
  const found = new Map<number, string>();
  for (const { isScale, attributes, path } of all)
    if (isScale && typeof attributes._Netcdf4Dimid === "number") found.set(attributes._Netcdf4Dimid, path);
  return found;
}

/** Paths of the scales of a dataset's dimensions by the numbers that netCDF notes beside it; null if it notes none. */
function notedScales(set: Hdf5Dataset, byId: ReadonlyMap<number, string>): (string | null)[] | null {
  const noted = set.attributes._Netcdf4Coordinates;
  const ids = typeof noted === "number" ? [noted] : noted;
  if (!Array.isArray(ids) || ids.length !== set.shape.length) return null;
  const scales = ids.map((id) => byId.get(id as number) ?? null);
  return scales.includes(null) ? null : scales;
}

/**
 * Names of a dataset's dimensions: those of their scales. A scale of one dimension is its own; without any scale, a dimension
 * takes the name of the only one-dimensional dataset beside it of that length, else one made from the dataset's name.
 */
export function dimensionNames(set: Hdf5Dataset, file: Hdf5File): string[] {
  const { datasets: all } = file;
  const own = variableName(set.path);
  if (set.isScale && set.shape.length === 1) return [own];
  const folder = set.path.slice(0, set.path.lastIndexOf("/") + 1);
  // netCDF's own numbers first: asking the library for scales can take for ever in a damaged file.
  const noted = notedScales(set, scalesById(all));
  const taken: string[] = [];
  set.shape.forEach((length, d) => {
    const scale = noted === null ? file.scale(set.path, d) : noted[d];
    const name = scale === null || scale === undefined ? undefined : variableName(scale);
    taken.push(name ?? beside(length) ?? `${own}_${d + 1}`);
  });
  return taken;

  function beside(length: number): string | undefined {
    const fitting = all.filter(
      ({ path, shape, type }) =>
        type !== null &&
        type !== "text" &&
        shape.length === 1 &&
        shape[0] === length &&
        path.startsWith(folder) &&
        !path.slice(folder.length).includes("/"),
    );
    const [only] = fitting;
    const name = only === undefined || fitting.length > 1 ? undefined : variableName(only.path);
    return name === undefined || (name === own && set.shape.length > 1) || taken.includes(name) ? undefined : name;
  }
}
