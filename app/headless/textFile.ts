/** Text files that a user names: read up to a limit, and every failure told in a sentence. */
import { closeSync, openSync, readSync } from 'node:fs';
import type { Outcome, Problem } from '../../sim-core/index.ts';

const WORDS: Readonly<Record<string, string>> = {
  ENOENT: 'There is no such file or folder.',
  EACCES: 'The file may not be opened: it belongs to someone else.',
  EPERM: 'The file may not be opened: it belongs to someone else.',
  EROFS: 'The file cannot be written: its disk is for reading only.',
  EISDIR: 'This is a folder, not a file.',
  ENOTDIR: 'One part of the path is a file, not a folder.',
  ENOSPC: 'The disk is full.',
  ENAMETOOLONG: 'The name of the file is too long.',
};

/** What the system says of a file, as a problem. Throws anything that no file has caused. */
export function fileProblem(path: string, error: unknown): Problem {
  const code = error instanceof Error && 'code' in error ? String(error.code) : null;
  // The system's own errors name the call that failed; Node's, a path no system can take.
  const ofFile = error instanceof Error && ('syscall' in error || code === 'ERR_INVALID_ARG_VALUE');
  if (!ofFile || code === null) throw error;
  return { place: path, message: WORDS[code] ?? `The file cannot be used (${code}).` };
}

/** The text of a file of at most `most` bytes. Endless files and folders are refused as well. */
export function readText(path: string, most: number): Outcome<string> {
  try {
    const file = openSync(path, 'r');
    try {
      // A byte more than allowed tells a longer file from one that just fits.
      const bytes = new Uint8Array(most + 1);
      let length = 0;
      for (;;) {
        const more = readSync(file, bytes, length, bytes.length - length, null);
        length += more;
        if (more === 0 || length > most) break;
      }
      if (length > most) {
        const message = `The file is longer than ${most} bytes, and no more are read: it is no file of this program.`;
        return { ok: false, problem: { place: path, message } };
      }
      const text = new TextDecoder('utf-8', { fatal: true }).decode(bytes.subarray(0, length));
      return { ok: true, value: text };
    } finally {
      closeSync(file);
    }
  } catch (error) {
    if (
      error instanceof TypeError &&
      'code' in error &&
      error.code === 'ERR_ENCODING_INVALID_ENCODED_DATA'
    ) {
      return { ok: false, problem: { place: path, message: 'The file holds no text (UTF-8).' } };
    }
    return { ok: false, problem: fileProblem(path, error) };
  }
}
