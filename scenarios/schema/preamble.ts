import { z } from 'zod';
import { text } from './field.ts';
import { type FileKind, formatTag } from './file-kind.ts';

/** The keys that every file may start with. */
export function preamble<K extends FileKind>(kind: K) {
  return {
    galehold: z
      .literal(formatTag(kind))
      .meta({ description: `Says that this is a ${kind} file, and of which format.` }),
    extends: text('Another file of this kind, read first; what stands here is laid over it.').optional(),
  };
}
