const reasons: Record<string, string> = {
  EACCES: "this user may not do that there",
  EBUSY: "the file is in use",
  EDQUOT: "the disc quota is used up",
  EFBIG: "the file would be larger than the file system allows",
  EIO: "the disc reports an input or output error",
  EISDIR: "it is a folder",
  ELOOP: "symbolic links lead in a circle",
  EMFILE: "too many files are open",
  ENAMETOOLONG: "the file name is too long",
  ENOENT: "the folder does not exist",
  ENOSPC: "the disc is full",
  ENOTDIR: "a part of the path is not a folder",
  EPERM: "this user may not do that there",
  EROFS: "the file system is read-only",
};

/**
 * Says in words why the operating system refused.
 *
 * @param error What was thrown.
 * @returns The reason, without a final period.
 */
export function systemReason(error: unknown): string {
  if (error instanceof Deno.errors.NotCapable) {
    return "the program was started without the permission to do that there (--allow-read, --allow-write)";
  }
  const { code, message } = error as { code?: string; message?: string };
  const known = code === undefined ? undefined : reasons[code];
  return known ?? message ?? String(error);
}
