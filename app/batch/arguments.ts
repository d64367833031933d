import { parseArgs } from "node:util";

export type BatchTask =
  | { readonly kind: "help"; readonly about: string | null }
  | { readonly kind: "schema" }
  | { readonly kind: "list"; readonly files: readonly string[]; readonly json: boolean }
  | {
      readonly kind: "run";
      readonly recipe: string;
      readonly files: readonly string[];
      readonly out: string;
      readonly workers: number | null;
      readonly hash: boolean;
    };

const MOST_WORKERS = 64;

/**
 * What a command line asks for.
 *
 * @throws Error in words for anything that it does not understand.
 */
export function batchTask(argv: readonly string[]): BatchTask {
  const { values, positionals } = parseArgs({
    args: [...argv],
    allowPositionals: true,
    options: {
      help: { type: "boolean", short: "h" },
      list: { type: "boolean" },
      json: { type: "boolean" },
      schema: { type: "boolean" },
      out: { type: "string" },
      workers: { type: "string" },
      "no-hash": { type: "boolean" },
    },
  });
  if (values.help) {
    if (positionals.length > 1) throw new Error("--help takes the name of one diagnostic, or none.");
    return { kind: "help", about: positionals[0] ?? null };
  }
  if (values.schema) return { kind: "schema" };
  if (values.list) {
    if (positionals.length === 0) throw new Error("--list wants at least one FILE.");
    return { kind: "list", files: positionals, json: values.json === true };
  }
  const [recipe, ...files] = positionals;
  if (recipe === undefined) throw new Error("A RECIPE.json and at least one FILE are wanted; --help shows how.");
  if (files.length === 0) throw new Error("At least one FILE is wanted after the recipe.");
  if (values.out === undefined) throw new Error("--out FOLDER is wanted: where the results go.");
  if (values.json) throw new Error("--json belongs to --list.");
  const workers = workerCount(values.workers);
  return { kind: "run", recipe, files, out: values.out, workers, hash: values["no-hash"] !== true };
}

function workerCount(text: string | undefined): number | null {
  if (text === undefined) return null;
  const count = Number(text);
  if (!Number.isInteger(count) || count < 1 || count > MOST_WORKERS)
    throw new Error(`--workers ${text} is not a whole number from 1 to ${MOST_WORKERS}.`);
  return count;
}
