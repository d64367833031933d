import { CATALOGUE } from "../../core/recipe/catalogue.ts";
import type { ToWorker } from "../../core/recipe/crew-line.ts";
import { CrewMember } from "../../core/recipe/crew-member.ts";
import { openDeskFile } from "./desk-file.ts";
import type { DeskFile } from "./desk-service.ts";

// The DOM's types describe a window's postMessage; in a dedicated worker it takes a message and what to transfer.
const post = postMessage as (message: unknown, transfer: Transferable[]) => void;
const member = new CrewMember<DeskFile>(openDeskFile, (message, transfer) => post(message, transfer), CATALOGUE);
addEventListener("message", ({ data }: MessageEvent<ToWorker<DeskFile>>) => void member.receive(data));
