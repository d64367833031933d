import type { Coordinate, Diagnostic, ResultVariable } from "../diagnostics/entry.ts";
import { REASONS } from "../field/reasons.ts";
import { diagnosticOf } from "./catalogue.ts";
import { coordinateText, numberText } from "./coordinate-text.ts";
import type { Result } from "./recipe.ts";
import { calendarOf, recordName } from "./result-file.ts";
import { reasonsOf } from "./result-reasons.ts";

/** Longer tables are not written: the netCDF file holds the numbers, and no spreadsheet takes them. */
export const MOST_ROWS = 200_000;
const LINES_AT_ONCE = 2000;

/** A result as one table: a row for each cell of `dims`, a column for each variable on those or fewer dims. */
export interface ResultTable {
  /** Calendar of the days in it. */
  readonly calendar: string | undefined;
  readonly dims: readonly string[];
  readonly shape: readonly number[];
  readonly coordinates: readonly (Coordinate | null)[];
  readonly variables: readonly ResultVariable[];
  readonly rows: number;
}

export interface TableChoice {
  /** null if every table would be too long. */
  readonly table: ResultTable | null;
  /** What the table leaves out, in words. */
  readonly note: string | null;
}

function cells(variable: ResultVariable): number {
  return variable.shape.reduce((product, length) => product * length, 1);
}

function tableOf(dims: ResultVariable, result: Result): ResultTable {
  const variables = result.variables.filter((variable) => variable.dims.every((dim) => dims.dims.includes(dim)));
  const coordinates = dims.dims.map((dim) => result.coordinates.find((coordinate) => coordinate.name === dim) ?? null);
  return {
    calendar: calendarOf(result),
    dims: dims.dims,
    shape: dims.shape,
    coordinates,
    variables,
    rows: cells(dims),
  };
}

/** A table that a diagnostic names: its events, their tracks. */
export interface NamedTable {
  readonly name: string;
  readonly table: ResultTable;
}

/** The tables of rows that the diagnostic numbers itself, in its order; those without a row are absent. */
export function namedTables(result: Result, catalogue?: readonly Diagnostic[]): NamedTable[] {
  const { tables = {} } = diagnosticOf(result.diagnostic, catalogue);
  return Object.entries(tables).flatMap(([dim, name]) => {
    const first = result.variables.find(({ dims }) => dims.length === 1 && dims[0] === dim);
    return first === undefined ? [] : [{ name, table: tableOf(first, result) }];
  });
}

/** A table as JSON: one object a row, keyed by the variables' names; times as dates, what is missing null. */
export function tableJson({ variables, rows, calendar, coordinates, dims }: ResultTable): string {
  const list = Array.from({ length: rows }, (_, row) => {
    const own: [string, unknown][] = dims.map((dim, d) => [dim, coordinates[d]?.values[row] ?? row]);
    for (const { name, data, units } of variables) {
      const { text, units: shown } = numberText(units, calendar);
      const value = data[row];
      own.push([name, Number.isNaN(value) ? null : shown === "UTC" ? text(value) : value]);
    }
    return Object.fromEntries(own);
  });
  return `${JSON.stringify(list, null, 2)}\n`;
}

/**
 * The table of the foremost variables that is short enough to be written: those of each step, else those of the record.
 * What stands in tables of its own is not asked for here.
 */
export function resultTable(whole: Result, mostRows = MOST_ROWS, catalogue?: readonly Diagnostic[]): TableChoice {
  const { tables = {} } = diagnosticOf(whole.diagnostic, catalogue);
  const result = { ...whole, variables: whole.variables.filter(({ dims }) => !dims.some((dim) => dim in tables)) };
  const fitting = result.variables.find((variable) => cells(variable) <= mostRows);
  if (fitting === undefined)
    return {
      table: null,
      note: `No CSV: every table of this result is over ${mostRows} rows; the netCDF file has it all.`,
    };
  const table = tableOf(fitting, result);
  const left = result.variables.filter((variable) => !table.variables.includes(variable)).map(({ name }) => name);
  if (left.length === 0) return { table, note: null };
  const why = cells(result.variables[0]) > mostRows ? `over ${mostRows} rows` : "another shape";
  return { table, note: `The CSV leaves out ${left.join(", ")} (${why}); the netCDF file has them.` };
}

/** A cell as RFC 4180 has it. */
function quoted(text: string): string {
  return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}

function heading(name: string, units: string): string {
  return quoted(units === "" || units === "1" ? name : `${name} (${units})`);
}

function headings({ dims, coordinates, variables, calendar }: ResultTable): string[] {
  const axes = dims.map((dim, i) => {
    const coordinate = coordinates[i];
    if (coordinate === null) return dim;
    return heading(recordName(coordinate) ?? dim, coordinateText(coordinate).units);
  });
  const columns = variables.flatMap((variable) => {
    const own = heading(variable.name, numberText(variable.units, calendar).units);
    return neededReasons(variable) === null ? [own] : [own, `${variable.name}_reason`];
  });
  return [...axes, ...columns];
}

/** Reasons of a variable that has any; a column of blanks would say nothing. */
function neededReasons(variable: ResultVariable): Uint8Array | null {
  const reasons = reasonsOf(variable);
  return reasons.some((code) => code !== 0) ? reasons : null;
}

/** Codes of reasons that leave no number: bytes have no NaN to say so themselves. */
const VALUELESS = new Set<number>(REASONS.filter(({ value }) => !value).map(({ code }) => code));
const REASON_WORDS = new Map<number, string>(REASONS.map(({ code, words }) => [code, code === 0 ? "" : words]));

/**
 * The table as CSV text, some thousand lines at a time: UTF-8, a header row with units, missing numbers empty. Numbers are
 * written with as many digits as it takes to read back the very same ones.
 */
export function* tableText(table: ResultTable): Generator<string> {
  yield `${headings(table).join(",")}\n`;
  const { dims, shape, variables, rows } = table;
  const axes = dims.map((_, i) => {
    const coordinate = table.coordinates[i];
    if (coordinate === null) return Array.from({ length: shape[i] }, (_, index) => String(index));
    const { text } = coordinateText(coordinate);
    return Array.from(coordinate.values, (value) => quoted(text(value)));
  });
  const columns = variables.map((variable) => {
    const strides = new Array<number>(dims.length).fill(0);
    let stride = 1;
    for (let d = variable.dims.length - 1; d >= 0; d--) {
      strides[dims.indexOf(variable.dims[d])] = stride;
      stride *= variable.shape[d];
    }
    const { text } = numberText(variable.units, table.calendar);
    return { data: variable.data, strides, reasons: neededReasons(variable), text };
  });
  const index = new Array<number>(dims.length).fill(0);
  let lines: string[] = [];
  for (let row = 0; row < rows; row++) {
    const fields = index.map((i, d) => axes[d][i]);
    for (const { data, strides, reasons, text } of columns) {
      let at = 0;
      for (let d = 0; d < index.length; d++) at += index[d] * strides[d];
      const value = data[at];
      const isMissing = Number.isNaN(value) || (reasons !== null && VALUELESS.has(reasons[at]));
      fields.push(isMissing ? "" : text(value));
      if (reasons !== null) fields.push(quoted(REASON_WORDS.get(reasons[at]) ?? ""));
    }
    lines.push(fields.join(","));
    if (lines.length === LINES_AT_ONCE) {
      yield `${lines.join("\n")}\n`;
      lines = [];
    }
    for (let d = dims.length - 1; d >= 0; d--) {
      index[d] += 1;
      if (index[d] < shape[d]) break;
      index[d] = 0;
    }
  }
  if (lines.length > 0) yield `${lines.join("\n")}\n`;
}
