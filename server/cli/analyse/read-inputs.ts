/** Reads the rig and the rules of `analyse`, each with its faults. */
import { readFile } from 'node:fs/promises';
import { defaultRules, parseRules, type Rules } from '@shared/flags';
import { checkRig, isFaultOfHome, rigFileSchema, rigModel, type RigModel } from '@shared/rig';
import { asInputFault, InputFault } from './input-fault';

export async function readRig(path: string): Promise<RigModel> {
  const value = await readJson(path);
  const faults = checkRig(value).filter((fault) => !isFaultOfHome(fault));
  if (faults.length > 0) throw new InputFault(faults.map((fault) => `${path}: ${fault.path || 'the file'}: ${fault.message} (${fault.code})`));
  return rigModel(rigFileSchema.parse(value));
}

export async function readRules(path: string | null, rig: RigModel): Promise<Rules> {
  if (path === null) return defaultRules(rig);
  const result = parseRules(await readJson(path), rig);
  if (!result.ok) throw new InputFault(result.faults.map((fault) => `${path}: ${fault.path || 'the file'}: ${fault.message} (${fault.code})`));
  return result.rules;
}

async function readJson(path: string): Promise<unknown> {
  try {
    return JSON.parse(await readFile(path, 'utf8'));
  } catch (error) {
    if (error instanceof SyntaxError) throw new InputFault([`${path}: this is not JSON: ${error.message} (JSON)`]);
    throw asInputFault(error, path);
  }
}
