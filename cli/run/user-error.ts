/** A fault of what the user gave (exit code 2): the message says what was found, where, and what is wanted instead. */
export class UserError extends Error {
  override readonly name = 'UserError';
}

/** What system calls report, in words; everything else keeps the system's own text. */
const REASONS: Readonly<Record<string, string>> = {
  ENOENT: 'no such file or directory',
  EACCES: 'permission denied',
  EPERM: 'operation not permitted',
  EROFS: 'the file system is read-only',
  EISDIR: 'is a directory; needs a file',
  ENOTDIR: 'a part of the path is not a directory',
  EEXIST: 'exists already',
  ENOSPC: 'no space left on the disk',
  ENAMETOOLONG: 'the name is too long',
};

/** True for an error of a file operation. */
export function isSystemError(error: unknown): error is NodeJS.ErrnoException {
  return (
    error instanceof Error && typeof (error as NodeJS.ErrnoException).code === 'string' && 'syscall' in error
  );
}

/** The user's view of a failed file operation; any other error comes back as it is. */
export function fileError(error: unknown, path: string): unknown {
  if (!isSystemError(error)) return error;
  return new UserError(`${path}: ${REASONS[error.code ?? ''] ?? error.message}`);
}
