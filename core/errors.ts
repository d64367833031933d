/** Every way in which data, a recipe or a request can be wrong. The kind is the error's `name`. */
export type ErrorKind =
  | "FormatError" // bytes that are not what their format says
  | "MetadataError" // a readable file whose names, units or axes cannot be understood
  | "UnitError"
  | "GridError"
  | "ShapeError"
  | "OptionError"
  | "RecipeError"
  | "NotFoundError"
  | "WorkerError"
  | "Cancelled";

/**
 * The one error class of the core.
 *
 * The message alone must be enough (what, where, what to do): over a worker's boundary only name, message and stack survive.
 */
export class DataError extends Error {
  constructor(kind: ErrorKind, message: string, cause?: unknown) {
    super(message, cause === undefined ? undefined : { cause });
    this.name = kind;
  }
}

/** True for an error that was thrown as `kind`, on either side of a worker's boundary. */
export function isKind(error: unknown, kind: ErrorKind): boolean {
  return error instanceof Error && error.name === kind;
}

/** The part of AbortSignal that the core needs; a plain `{ aborted: false }` will do. */
export interface CancelSignal {
  readonly aborted: boolean;
}

/** @throws Cancelled if the task was cancelled. */
export function throwIfCancelled(signal: CancelSignal | undefined): void {
  if (signal?.aborted) throw new DataError("Cancelled", "The task was cancelled.");
}
