/** What a file system's refusal means, in words. Node only. */
import { mkdirSync, statSync } from 'node:fs';
import { dirname } from 'node:path';

const REASONS: Readonly<Record<string, string>> = {
  EACCES: 'no permission to write there',
  EPERM: 'no permission to write there',
  EROFS: 'the file system is read-only',
  ENOSPC: 'the disk is full',
  EDQUOT: 'the disk quota is used up',
  EISDIR: 'it is a folder, not a file',
  ENOTDIR: 'a part of the path is a file, not a folder',
  EEXIST: 'a part of the path is a file, not a folder',
  ENOENT: 'a folder above it does not exist and cannot be made',
  ENAMETOOLONG: 'the name is too long',
};

export function faultText(cause: unknown): string {
  if (!(cause instanceof Error)) return String(cause);
  const code = 'code' in cause ? String(cause.code) : '';
  return REASONS[code] ?? cause.message;
}

/**
 * Makes `folder` and those above it. Node's own recursive form never comes back from a place such as /proc, where
 * folders cannot be made although everything above them exists.
 */
export function makeFolders(folder: string): void {
  if (statSync(folder, { throwIfNoEntry: false })?.isDirectory()) return;
  if (dirname(folder) !== folder) makeFolders(dirname(folder));
  mkdirSync(folder);
}
