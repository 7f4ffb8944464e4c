/** The kinds of file and the tag that each starts with. */
export const FILE_KINDS = ['turbine', 'controller', 'protection', 'scenario'] as const;
export type FileKind = (typeof FILE_KINDS)[number];

export function formatTag<K extends FileKind>(kind: K): `${K}/1` {
  return `${kind}/1`;
}
