import { type CancelSignal, DataError, throwIfCancelled } from "../../errors.ts";
import type { ByteSource } from "../byte-source.ts";
import { edition1Message } from "./edition1.ts";
import { edition2Message } from "./edition2.ts";
import type { GribEntry, GribIndex } from "./grib-index.ts";
import { HeaderWindow } from "./header-window.ts";
import { MessageList } from "./message-list.ts";
import { spells } from "./octets.ts";

export interface ScanHooks {
  /** Told the share of the file that is looked through, 0 … 1. */
  progress?(done: number): void;
  signal?: CancelSignal | undefined;
}

/** A message as a scan found it. */
export interface ScannedMessage {
  /** Bytes in all, "GRIB" and "7777" included. */
  readonly length: number;
  readonly entries: readonly GribEntry[];
}

/** The shortest message; what is nearer to the end holds none. */
const SHORTEST = 20;
/** Messages this short are fetched several at once. */
const DENSE = 32_768;
/** Damage told one by one; a file full of it is told in one line. */
const MOST_NOTES = 20;

async function messageAt(window: HeaderWindow, at: number, list: MessageList): Promise<ScannedMessage> {
  const edition = (await window.bytes(at, 8))[7] as number;
  if (edition !== 1 && edition !== 2)
    throw new DataError("FormatError", `it says to be of edition ${edition}, and only 1 and 2 exist here`);
  const message = await (edition === 1 ? edition1Message : edition2Message)(window, at, list);
  window.isDense = message.length < DENSE;
  const end = at + message.length;
  // One more read at the end of a message brings the next one's header with it.
  if (!spells(await window.bytes(end - 4, 4), 0, "7777"))
    throw new DataError("FormatError", `its ${message.length} bytes do not end in 7777`);
  return message;
}

/**
 * Find every message of a file and what it holds, reading headers alone.
 *
 * What is damaged is skipped and told in the notes; zeros and other bytes between messages are passed over.
 *
 * @throws Cancelled; FormatError from the source.
 */
export async function scannedIndex(source: ByteSource, hooks: ScanHooks = {}): Promise<GribIndex> {
  const window = new HeaderWindow(source);
  const list = new MessageList();
  const notes: string[] = [];
  let messages = 0;
  let damaged = 0;
  for (let at = await window.nextGrib(0); at >= 0 && at + SHORTEST <= source.size; ) {
    throwIfCancelled(hooks.signal);
    hooks.progress?.(at / source.size);
    let next = at + 4;
    try {
      const { length, entries } = await messageAt(window, at, list);
      for (const entry of entries) list.entries.push(entry);
      messages += 1;
      next = at + length;
    } catch (error) {
      if (!(error instanceof DataError) || error.name === "Cancelled") throw error;
      damaged += 1;
      if (damaged <= MOST_NOTES)
        notes.push(
          `${source.name}: the message at byte ${at} is damaged (${error.message}) and is skipped. Fetch the file again to have it.`,
        );
    }
    at = await window.nextGrib(next);
  }
  if (damaged > MOST_NOTES) notes.push(`${source.name}: ${damaged} messages in all are damaged and skipped.`);
  hooks.progress?.(1);
  return { version: 1, size: source.size, grids: list.grids, entries: list.entries, messages, notes };
}
