import { parentPort } from "node:worker_threads";
import { CATALOGUE } from "../../core/recipe/catalogue.ts";
import type { ToWorker } from "../../core/recipe/crew-line.ts";
import { CrewMember } from "../../core/recipe/crew-member.ts";
import { openBatchFile } from "./batch-file.ts";
import type { BatchFile } from "./thread-crew.ts";

const port = parentPort;
if (port === null) throw new Error("This file runs as a worker of the batch command.");
const member = new CrewMember<BatchFile>(
  openBatchFile,
  (message, transfer) => port.postMessage(message, transfer),
  CATALOGUE,
);
port.on("message", (message: ToWorker<BatchFile>) => void member.receive(message));
