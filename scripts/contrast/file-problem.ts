import { InputError } from './input-error';

const words: Record<string, string> = {
  ENOENT: 'there is no such file',
  EISDIR: 'it is a folder',
  ENOTDIR: 'a part of the path is no folder',
  EACCES: 'it may not be read or written by this account',
  EPERM: 'it may not be read or written by this account',
  EROFS: 'the file system is read-only',
};

/** The reason a file given by an option could not be used, as an error of the input. */
export function fileProblem(option: string, path: string, reason: unknown): InputError {
  const code = reason instanceof Error && 'code' in reason ? String(reason.code) : '';
  const said = words[code] ?? (reason instanceof Error ? reason.message : String(reason));
  return new InputError(`${option} ${path}: ${said}. Check the path.`);
}
