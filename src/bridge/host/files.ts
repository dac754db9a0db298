/** Files on disk for both hosts: whole or not at all. */
import { randomBytes } from 'node:crypto';
import { existsSync } from 'node:fs';
import { mkdir, open, readFile, rename, rm, stat } from 'node:fs/promises';
import { dirname, join, resolve, sep } from 'node:path';
import { HostError } from '../host.ts';

/** Writes beside the target, flushes, then renames: a crash leaves the old file or the new one, never half. */
export async function saveWhole(path: string, data: string | Uint8Array): Promise<void> {
  const beside = `${path}.${randomBytes(4).toString('hex')}.new`;
  try {
    const file = await open(beside, 'wx');
    try {
      await file.writeFile(data);
      await file.sync();
    } finally {
      await file.close();
    }
    await rename(beside, path);
  } catch (error) {
    await rm(beside, { force: true });
    throw cannot('write', path, error);
  }
}

export async function readWhole(path: string): Promise<Uint8Array> {
  try {
    const bytes = await readFile(path);
    return new Uint8Array(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  } catch (error) {
    throw cannot('read', path, error);
  }
}

/**
 * Puts a set of files into a folder as a whole: into a fresh folder beside it, then in its place.
 * @throws HostError when something else than an earlier export lies there
 */
export async function putFolder(
  folder: string,
  files: readonly { path: string; bytes: Uint8Array }[],
): Promise<void> {
  if (existsSync(folder) && !(await isExport(folder)))
    throw new HostError({
      problem: `${folder} holds other things`,
      mend: 'choose another folder, or move them away',
    });
  const mark = randomBytes(4).toString('hex');
  const fresh = `${folder}.${mark}.new`;
  const old = `${folder}.${mark}.old`;
  try {
    for (const file of files) {
      const path = resolve(fresh, file.path);
      if (!path.startsWith(resolve(fresh) + sep))
        throw new HostError({ problem: `"${file.path}" leaves the folder`, mend: 'nothing was written' });
      await mkdir(dirname(path), { recursive: true });
      const handle = await open(path, 'wx');
      await handle.writeFile(file.bytes);
      await handle.close();
    }
    if (existsSync(folder)) await rename(folder, old);
    await rename(fresh, folder);
    await rm(old, { recursive: true, force: true });
  } catch (error) {
    await rm(fresh, { recursive: true, force: true });
    if (existsSync(old) && !existsSync(folder)) await rename(old, folder);
    if (error instanceof HostError) throw error;
    throw cannot('write', folder, error);
  }
}

async function isExport(folder: string): Promise<boolean> {
  try {
    if (!(await stat(folder)).isDirectory()) return false;
    const report = JSON.parse(await readFile(join(folder, 'report.json'), 'utf8')) as { format?: unknown };
    return report.format === 'beamdrape-report';
  } catch {
    return false;
  }
}

function cannot(what: 'read' | 'write', path: string, error: unknown): HostError {
  const code = (error as { code?: string }).code;
  const why =
    code === 'ENOENT'
      ? 'it is not there'
      : code === 'EACCES' || code === 'EPERM'
        ? 'it is not allowed'
        : code === 'ENOSPC'
          ? 'the disk is full'
          : (error as Error).message;
  return new HostError({
    problem: `cannot ${what} ${path}: ${why}`,
    mend: what === 'read' ? 'check that it is still there' : 'save to another place',
  });
}
