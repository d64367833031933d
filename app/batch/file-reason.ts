/** An error of the file system in words, without the program's own call names. */
export function reason(error: unknown): string {
  const { code, message } = error as NodeJS.ErrnoException;
  const known: Readonly<Record<string, string>> = {
    ENOENT: "there is no such file or folder",
    EACCES: "permission denied",
    EPERM: "permission denied",
    EISDIR: "it is a folder",
    ENOTDIR: "a part of the path is no folder",
    EEXIST: "a file of that name is in the way",
    EROFS: "the disk can only be read",
    ENOSPC: "the disk is full",
    EMFILE: "too many files are open",
  };
  return known[code ?? ""] ?? message;
}
