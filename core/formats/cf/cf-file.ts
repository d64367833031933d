import { DataError } from "../../errors.ts";
import type { Correction, FieldDescription, FileContents, LeftOut, OpenFile } from "../dataset.ts";
import type { StoredVariable, VariableStore } from "../variable-store.ts";
import { longName, textOf } from "./attributes.ts";
import { decodingOf } from "./decoding.ts";
import { AxisShelf, fieldLayouts } from "./field-layout.ts";
import { fieldSlab, type ReadableField } from "./field-slab.ts";
import { recognition } from "./quantity-of.ts";

const ABOUT = ["title", "institution", "source", "comment", "references", "history"];

/** Variables that only serve others: coordinates, their bounds, grid mappings, text. */
function servesOthers(variable: StoredVariable, served: ReadonlySet<string>): boolean {
  return variable.type === "char" || variable.shape.length < 2 || served.has(variable.name);
}

/** Names that variables refer to as their bounds or grid mapping. */
function servingNames(store: VariableStore): ReadonlySet<string> {
  const names = store.variables.flatMap(({ attributes }) =>
    ["bounds", "climatology", "grid_mapping"].map((name) => textOf(attributes, name) ?? ""),
  );
  return new Set(names);
}

async function readableFields(
  store: VariableStore,
  variable: StoredVariable,
  shelf: AxisShelf,
  correction: Correction | undefined,
): Promise<ReadableField[]> {
  const layouts = await fieldLayouts(store, variable, shelf, correction);
  const known = recognition(variable, correction);
  if ("refused" in known) throw new DataError("UnitError", known.refused);
  const packing = decodingOf(variable);
  const { factor, offset } = known.conversion;
  const decoding = { ...packing, scale: packing.scale * factor, offset: packing.offset * factor + offset };
  return layouts.map((layout) => {
    const description: FieldDescription = {
      key: `${store.name}/${variable.name}${layout.suffix}`,
      file: store.name,
      variable: variable.name,
      longName: longName(variable),
      quantity: known.quantity,
      why: known.why,
      unitsInFile: known.unitsInFile,
      units: known.conversion.units,
      grid: layout.grid,
      steps: layout.steps,
      levels: layout.levels,
      members: layout.members,
      reference: layout.reference,
      ...(correction?.apart === true ? { apart: true } : {}),
    };
    return { description, variable, layout, decoding };
  });
}

/** What a store holds under the CF conventions, and slabs of it. Variables that are no usable fields are listed with the reason. */
export async function openCfFile(
  store: VariableStore,
  bytes: number,
  corrections: readonly Correction[],
): Promise<OpenFile> {
  const shelf = new AxisShelf(store);
  const fields = new Map<string, ReadableField>();
  const leftOut: LeftOut[] = [];
  const notes = new Set(store.notes);
  const served = servingNames(store);
  for (const variable of store.variables) {
    if (servesOthers(variable, served)) continue;
    const correction = corrections.find((said) => said.file === store.name && said.variable === variable.name);
    try {
      for (const field of await readableFields(store, variable, shelf, correction)) {
        fields.set(field.description.key, field);
        for (const note of field.layout.notes) notes.add(note);
      }
    } catch (error) {
      if (!(error instanceof DataError)) throw error;
      leftOut.push({ file: store.name, variable: variable.name, why: error.message });
    }
  }
  const about = Object.fromEntries(
    ABOUT.flatMap((name) => {
      const text = textOf(store.attributes, name);
      return text === undefined || text === "" ? [] : [[name, text]];
    }),
  );
  const contents: FileContents = {
    file: store.name,
    format: store.format,
    bytes,
    fields: [...fields.values()].map(({ description }) => description),
    leftOut,
    notes: [...notes],
    about,
  };
  return {
    contents,
    async read(key, request) {
      const field = fields.get(key);
      if (field === undefined) throw new DataError("NotFoundError", `There is no field ${key} in what is open.`);
      return fieldSlab(store, field, request);
    },
    close: () => store.close(),
  };
}
