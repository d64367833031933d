import { DataError } from "../../errors.ts";
import type { FieldDescription, FieldReader, OpenFile } from "../dataset.ts";
import { readField } from "./read-field.ts";
import { type Records, recordFields } from "./record-fields.ts";

/** Some open files and what they hold together. */
export class OpenRecords {
  readonly files: readonly OpenFile[];
  #records: Records | null = null;

  constructor(files: readonly OpenFile[]) {
    this.files = files;
  }

  /** Joined when first asked for. */
  get records(): Records {
    this.#records ??= recordFields(this.files.map(({ contents }) => contents));
    return this.#records;
  }

  /** A record, or a single file's field. @throws NotFoundError for a key that is not open. */
  field(key: string): FieldDescription {
    const found =
      this.records.fields.find((field) => field.key === key) ??
      this.files.flatMap(({ contents }) => contents.fields).find((field) => field.key === key);
    if (found !== undefined) return found;
    throw new DataError("NotFoundError", `${key} is not open here. Open its file again.`);
  }

  /**
   * Reads slabs of one member of a field.
   *
   * @param member Number of the member; null on a field without members.
   * @throws NotFoundError for a member that the field does not have.
   */
  reader(field: FieldDescription, member: number | null): FieldReader {
    const index = member === null ? 0 : (field.members?.indexOf(member) ?? -1);
    if (index < 0) throw new DataError("NotFoundError", `${field.key} has no member ${member}.`);
    return (request) => readField(this.files, field, { ...request, member: index });
  }
}
