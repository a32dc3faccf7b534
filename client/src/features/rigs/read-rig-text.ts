import { ApiProblem } from '../../lib/api-problem';
import { checkRig } from '@shared/rig';

/** What a text is: a sound rig file, or a problem that names every fault by its place. */
export type RigText = { state: 'empty' } | { state: 'sound'; file: unknown; code: string; title: string; cables: number } | { state: 'faulty'; problem: ApiProblem };

/** Line and column of a character, both from 1. */
function placeOf(text: string, index: number): string {
  const before = text.slice(0, index).split('\n');
  return `line ${before.length}, column ${(before.at(-1)?.length ?? 0) + 1}`;
}

/** Where JSON.parse stopped, as far as the engine's message tells. */
function jsonFault(text: string, error: unknown): ApiProblem {
  const message = error instanceof Error ? error.message : '';
  const position = /position (\d+)/.exec(message)?.[1];
  const path = position === undefined ? (/end of JSON|Unexpected end/.test(message) ? 'the end' : '') : placeOf(text, Number(position));
  return new ApiProblem({
    code: 'NOT_JSON',
    detail: 'This is not a JSON text.',
    wayOut: 'Mend the text below, or choose the file again as the rig’s software wrote it.',
    faults: [{ code: 'NOT_JSON', path, message: 'Reading stopped here: a comma, bracket or quotation mark is missing or too many.' }],
  });
}

/** Reads a rig text with the same rules as the server, so that faults show before anything is sent. */
export function readRigText(text: string): RigText {
  if (text.trim() === '') return { state: 'empty' };
  let file: unknown;
  try {
    file = JSON.parse(text);
  } catch (error) {
    return { state: 'faulty', problem: jsonFault(text, error) };
  }
  const faults = checkRig(file);
  if (faults.length > 0) {
    return {
      state: 'faulty',
      problem: new ApiProblem({ code: 'RIG_FAULTY', detail: faults.length === 1 ? 'One thing in this rig file is wrong.' : `${faults.length} things in this rig file are wrong.`, wayOut: 'Nothing is imported until all are mended.', faults }),
    };
  }
  // checkRig found the shape sound, so these fields are there.
  const rig = file as { code: string; title: string; cables: readonly unknown[] };
  return { state: 'sound', file, code: rig.code, title: rig.title, cables: rig.cables.length };
}
