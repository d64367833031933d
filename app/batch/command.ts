import { CATALOGUE, diagnosticOf } from "../../core/recipe/catalogue.ts";
import { recipeSchema } from "../../core/recipe/schema.ts";
import { type BatchTask, batchTask } from "./arguments.ts";
import { diagnosticHelp, generalHelp } from "./help-text.ts";
import { fileListing, listingJson, recordListing } from "./listing.ts";
import { closeAll, openFiles, runFromCommand } from "./recipe-run.ts";

/** What the command touches besides files. */
export interface BatchIo {
  stdout(text: string): void;
  stderr(text: string): void;
  /** True where stderr is a terminal. */
  readonly showsProgress: boolean;
  readonly signal: AbortSignal;
  /** The built worker, beside the built command. */
  readonly workerUrl: URL;
  readonly cores: number;
}

const WRONG = 2;

async function answer(task: BatchTask, io: BatchIo): Promise<number> {
  switch (task.kind) {
    case "help":
      io.stdout(task.about === null ? generalHelp(CATALOGUE) : diagnosticHelp(diagnosticOf(task.about)));
      return 0;
    case "schema":
      io.stdout(`${JSON.stringify(recipeSchema(CATALOGUE), null, 2)}\n`);
      return 0;
    case "list": {
      const files = await openFiles(task.files, []);
      const contents = files.map((file) => file.contents);
      await closeAll(files);
      const joined = recordListing(contents);
      const text = contents.map(fileListing).join("\n\n") + (joined === "" ? "" : `\n\njoined:\n${joined}`);
      io.stdout(`${task.json ? listingJson(contents) : text}\n`);
      return 0;
    }
    case "run":
      return runFromCommand(task, io);
  }
}

/**
 * The batch command.
 *
 * @param argv Words after the command's name.
 * @returns Exit code: 0 done, 1 a result failed, 2 the command, the recipe or a file is wrong, 130 stopped.
 */
export async function run(argv: readonly string[], io: BatchIo): Promise<number> {
  try {
    return await answer(batchTask(argv), io);
  } catch (error) {
    io.stderr(`${error instanceof Error ? error.message : String(error)}\n`);
    return WRONG;
  }
}
