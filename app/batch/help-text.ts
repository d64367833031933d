import type { Diagnostic, OptionSpec } from "../../core/diagnostics/entry.ts";

const WIDTH = 96;

/** Words wrapped at `WIDTH`, each line after `indent`. */
function wrapped(text: string, indent: string): string {
  const lines: string[] = [];
  let line = "";
  for (const word of text.split(/\s+/)) {
    if (line !== "" && indent.length + line.length + 1 + word.length > WIDTH) {
      lines.push(indent + line);
      line = word;
    } else line = line === "" ? word : `${line} ${word}`;
  }
  lines.push(indent + line);
  return lines.join("\n");
}

export function generalHelp(catalogue: readonly Diagnostic[]): string {
  const widest = Math.max(...catalogue.map(({ id }) => id.length));
  return `npm run batch -- RECIPE.json FILE... --out FOLDER [--workers N] [--no-hash]
    Run a recipe on files. For each result FOLDER/<id>.nc (netCDF, CF attributes) and, where it is
    not too long, FOLDER/<id>.csv; FOLDER/run.json says what was run on what.
npm run batch -- --list FILE... [--json]
    What the files hold, and what it was taken for.
npm run batch -- --help DIAGNOSTIC
    What a diagnostic computes: options, outputs, validity, sources.
npm run batch -- --schema
    The recipe's JSON Schema.

--workers N   threads that work at once; default: the number of cores, at most 4. The numbers do
              not depend on it.
--no-hash     leave the SHA-256 of the files out of run.json, and save reading them whole.

Exit code: 0 done; 1 a result failed, the others are written; 2 the command, the recipe or a file
is wrong, nothing was run; 130 stopped by Ctrl+C. A result file is written whole or not at all.

A recipe:
  {
    "isohypse": 1,
    "background": { "kind": "annual-cycle", "harmonics": 4 },
    "results": [
      { "id": "waves", "diagnostic": "zonal-waves", "field": "geopotential_height",
        "level": 500, "band": [50, 60], "waves": [1, 6] }
    ]
  }
"field" is a quantity, or "file name/variable"; "level" (hPa, one or a list) and "period" (first and
last date) are optional. Backgrounds: none, record-mean, period-mean (from, to), annual-cycle
(harmonics), running-mean (days).

Diagnostics:
${catalogue.map(({ id, summary }) => `  ${id.padEnd(widest)}  ${wrapped(summary, " ".repeat(widest + 4)).trimStart()}`).join("\n")}
`;
}

function shown(value: OptionSpec["default"]): string {
  return value === null ? "none" : JSON.stringify(value);
}

function optionHelp(option: OptionSpec): string {
  const units = option.units === undefined ? "" : ` ${option.units}`;
  const whole = option.kind === "integer" || ("integer" in option && option.integer === true) ? "whole " : "";
  const admitted = {
    boolean: () => "true or false",
    choice: () => "",
    number: () => `${whole}number`,
    integer: () => `${whole}number`,
    range: () => `[low, high], ${whole}numbers`,
    list: () => `list of ${whole}numbers`,
  }[option.kind]();
  const bounds = "min" in option ? ` from ${option.min} to ${option.max}${units}` : "";
  const choices = option.kind === "choice" ? option.choices.map(({ value }) => JSON.stringify(value)).join(" | ") : "";
  const head = `  "${option.name}": ${admitted}${bounds}${choices}; default ${shown(option.default)}`;
  const list =
    option.kind === "choice" ? option.choices.map(({ value, title }) => `\n      ${value}: ${title}`).join("") : "";
  return `${head}\n${wrapped(`${option.title}. ${option.about}`, "      ")}${list}`;
}

/** All that the catalogue says of one diagnostic, as text. */
export function diagnosticHelp(diagnostic: Diagnostic): string {
  const inputs = diagnostic.inputs.map(({ name, about, quantities }) => {
    const which = quantities === "any" ? "any field" : quantities.join(", ");
    return `  ${name}: ${about} (${which})`;
  });
  const outputs = diagnostic.outputs.map(({ name, units, dims, about, when }) => {
    const condition = when === undefined ? "" : ` Written when: ${when}`;
    return `  ${name} (${dims.join(", ")}), ${units === "input" ? "units of the field" : units}\n${wrapped(about + condition, "      ")}`;
  });
  const section = (title: string, lines: readonly string[]): string =>
    lines.length === 0 ? "" : `\n${title}\n${lines.join("\n")}\n`;
  return [
    `${diagnostic.id}: ${diagnostic.title}\n${wrapped(diagnostic.summary, "")}\n`,
    section("Valid", [wrapped(diagnostic.validity, "  ")]),
    section("Inputs", inputs),
    section("Options", diagnostic.options.map(optionHelp)),
    section("Outputs", outputs),
    section(
      "Sources",
      diagnostic.sources.map((source) => wrapped(source, "  ")),
    ),
  ].join("");
}
