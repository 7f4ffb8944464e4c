/** JSON Schema of each kind of file, for editors that complete and check. */
import { z } from 'zod';
import { UNKNOWN_MACHINE } from '../machine.ts';
import { controllerFile } from './controller.ts';
import type { FileKind } from './file-kind.ts';
import { protectionFile } from './protection.ts';
import { scenarioFile } from './scenario.ts';
import { turbineFile } from './turbine.ts';

const SCHEMAS: Readonly<Record<FileKind, () => z.ZodType>> = {
  turbine: () => turbineFile,
  controller: () => controllerFile(UNKNOWN_MACHINE),
  protection: () => protectionFile(UNKNOWN_MACHINE),
  scenario: () => scenarioFile(UNKNOWN_MACHINE),
};

/** The JSON Schema (draft 7, which editors of YAML know best) of what a person writes, before units are decoded. */
export function jsonSchema(kind: FileKind): object {
  return z.toJSONSchema(SCHEMAS[kind](), { io: 'input', target: 'draft-7' });
}
