/** The kinds of file and the tag that each starts with. */
import { z } from 'zod';
import { text } from './field.ts';

export const FILE_KINDS = ['turbine', 'controller', 'protection', 'scenario'] as const;
export type FileKind = (typeof FILE_KINDS)[number];

export function formatTag<K extends FileKind>(kind: K): `${K}/1` {
  return `${kind}/1`;
}

/** The keys that every file may start with. */
export function preamble<K extends FileKind>(kind: K) {
  return {
    galehold: z
      .literal(formatTag(kind))
      .meta({ description: `Says that this is a ${kind} file, and of which format.` }),
    extends: text('Another file of this kind, read first; what stands here is laid over it.').optional(),
  };
}
