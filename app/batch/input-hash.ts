import { createHash } from "node:crypto";
import { createReadStream } from "node:fs";
import { stat } from "node:fs/promises";

export interface InputRecord {
  readonly file: string;
  readonly bytes: number;
  /** ISO 8601, UTC. */
  readonly modified: string;
  /** null if it was not wanted, or the run ended before it was known. */
  readonly sha256: string | null;
}

const READ_AT_ONCE = 1 << 20;

/** SHA-256 of a file, read as a stream beside whatever else goes on. */
async function sha256(path: string, signal: AbortSignal): Promise<string> {
  const hash = createHash("sha256");
  for await (const bytes of createReadStream(path, { highWaterMark: READ_AT_ONCE, signal }))
    hash.update(bytes as Buffer);
  return hash.digest("hex");
}

/** What a file was when it was read, so that a colleague can tell whether theirs is the same. */
export async function inputRecord(path: string, isHashed: boolean, signal: AbortSignal): Promise<InputRecord> {
  const { size, mtime } = await stat(path);
  const record = { file: path, bytes: size, modified: mtime.toISOString() };
  if (!isHashed) return { ...record, sha256: null };
  const hash = await sha256(path, signal).catch((error: unknown) => {
    if (signal.aborted) return null;
    throw error;
  });
  return { ...record, sha256: hash };
}
