import { mkdir, mkdtemp, readdir, rename, rm } from 'node:fs/promises';
import path from 'node:path';
import { fileProblem } from './file-problem';
import { InputError } from './input-error';

/** Every file that a result may hold; anything else in a folder is somebody's own. */
const ours = /^(result\.json|(edges(-[a-z-]+)?|clusters)\.(tsv|json)|[a-z-]+\.npy)$/;

/**
 * Refuses a folder that a result may not take the place of, before anything is computed.
 * @throws InputError
 */
export async function checkOut(out: string, overwrite: boolean): Promise<void> {
  const names = await readdir(out).catch((reason: unknown): string[] => {
    const code = reason instanceof Error && 'code' in reason ? reason.code : '';
    if (code === 'ENOENT') return [];
    if (code === 'ENOTDIR') {
      throw new InputError(`--out ${out}: is a file; name a folder that is new or empty.`);
    }
    throw fileProblem('--out', out, reason);
  });
  if (names.length === 0) return;
  if (!overwrite) {
    throw new InputError(`--out ${out}: is not empty; name another folder, or add --overwrite.`);
  }
  const foreign = names.find((name) => !ours.test(name));
  if (foreign !== undefined || !names.includes('result.json')) {
    throw new InputError(
      `--out ${out}: holds ${foreign ?? 'no result.json'} and so is no result alone; --overwrite replaces only results, so name another folder.`,
    );
  }
}

/**
 * Lets `fill` write into a new folder beside `out`, and only when all is there puts it in its
 * place. Whatever fails, `out` is as it was and nothing lies beside it.
 */
export async function writeWhole(
  out: string,
  overwrite: boolean,
  fill: (folder: string) => Promise<void>,
): Promise<void> {
  const target = path.resolve(out);
  const parent = path.dirname(target);
  let made: string;
  try {
    await mkdir(parent, { recursive: true });
    made = await mkdtemp(path.join(parent, `.${path.basename(target)}-`));
  } catch (reason) {
    throw fileProblem('--out', out, reason);
  }
  const fresh = path.join(made, 'new');
  const old = path.join(made, 'old');
  try {
    await mkdir(fresh);
    await fill(fresh);
    // Again: much can have happened to the folder during a long run.
    await checkOut(out, overwrite);
    const replaced = await rename(target, old).then(
      () => true,
      () => false,
    );
    try {
      await rename(fresh, target);
    } catch (reason) {
      if (replaced) await rename(old, target);
      throw reason;
    }
  } finally {
    await rm(made, { recursive: true, force: true });
  }
}
