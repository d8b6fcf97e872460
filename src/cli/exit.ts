/** What the exit codes say. */
export const EXIT = { done: 0, missed: 1, badInput: 2, failed: 3, interrupted: 130 } as const;

/** Ends a command with a message for people and an exit code. */
export class CommandError extends Error {
  override readonly name = 'CommandError';
  readonly code: number;
  /** For `--json`: what to print besides the message. */
  readonly details: Readonly<Record<string, unknown>>;
  constructor(code: number, message: string, details: Readonly<Record<string, unknown>> = {}) {
    super(message);
    this.code = code;
    this.details = details;
  }
}

/** Why a call to the file system failed, in words, or its code. */
export function reasonOf(error: unknown): string {
  const { code } = error as NodeJS.ErrnoException;
  const words: Readonly<Record<string, string>> = {
    ENOENT: 'it does not exist',
    EACCES: 'access is denied',
    EPERM: 'it is not permitted',
    EROFS: 'the disk is read-only',
    ENOSPC: 'the disk is full',
    EDQUOT: 'the quota of the disk is used up',
    ENOTDIR: 'a part of the path is a file, not a folder',
    EISDIR: 'it is a folder',
    EEXIST: 'it exists already',
    ENAMETOOLONG: 'the name is too long',
    EMFILE: 'too many files are open',
    ELOOP: 'its links run in a circle',
    EBUSY: 'another program is using it',
    EIO: 'the disk reports an error',
  };
  return words[code ?? ''] ?? code ?? (error instanceof Error ? error.message : String(error));
}
