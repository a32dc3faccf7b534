import { checkRig, isFaultOfHome } from './check-rig';
import { NumericError } from './numeric-error';
import { rigFileSchema } from './rig-file';
import { rigModel, type RigModel } from './rig-model';

/**
 * The computing form of a rig from outside (a file, a request).
 *
 * Faults that concern only the home pose are let through: such a rig still has kinematics to look at, and finding out
 * why it fails needs them.
 *
 * @throws NumericError BAD_RIG with the first fault and the number of others
 */
export function parseRig(input: unknown): RigModel {
  const faults = checkRig(input).filter((fault) => !isFaultOfHome(fault));
  const first = faults[0];
  if (first !== undefined) {
    const others = faults.length > 1 ? ` (and ${faults.length - 1} more; rig.check lists them)` : '';
    throw new NumericError('BAD_RIG', `${first.code} at ${first.path === '' ? 'the file' : first.path}: ${first.message}${others}`);
  }
  return rigModel(rigFileSchema.parse(input));
}
