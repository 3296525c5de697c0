import { InputError } from '../engine/errors.ts';

/** Whether an error is the file system's refusal of that code. */
export function isCode(error: unknown, code: string): boolean {
  return error instanceof Error && 'code' in error && error.code === code;
}

/** What the file system's refusals mean to the person, and what helps; the rest are told by their code. */
const REFUSALS: Readonly<Record<string, readonly [got: string, hint: string]>> = {
  EACCES: ['a place without leave to write', 'choose a folder of your own'],
  EPERM: ['a place without leave to write', 'choose a folder of your own'],
  EROFS: ['a read-only place', 'choose a folder on another disk'],
  ENOSPC: ['a full disk', 'free some space, or choose another disk'],
  ENOENT: ['a folder that is not there or cannot be made', 'check the name'],
  ENOTDIR: ['a path that leads through a file', 'check the name'],
  EEXIST: ['a file in the way', 'check the name'],
  ENOTEMPTY: ['a folder that another run has just written', 'let one run end before the next'],
  ENAMETOOLONG: ['a name that is too long', 'give a shorter one'],
  EBUSY: ['a folder in use', 'close what has it open, or choose another folder'],
  ERR_INVALID_ARG_VALUE: ['a name that no file can have', 'check the name'],
};

/** A refusal of the file system as an input fault; anything else as it is. */
export function writeFault(where: string, error: unknown, expected: string): unknown {
  if (error instanceof InputError || !(error instanceof Error) || !('code' in error)) return error;
  const code = String(error.code);
  const known = REFUSALS[code];
  if (!known && !/^E[A-Z0-9]+$/.test(code)) return error;
  const [got, hint] = known ?? [`a place that cannot be written (${code})`, 'choose another'];
  return new InputError({ code: `out-${code.toLowerCase()}`, where, got, expected, hint });
}
