/** Is what a device says of itself in hello something that can be recorded? */
import { parseChannels } from '@shared/recording';
import type { FaultCode, Hello, LinkOptions } from '@shared/link';
import type { Database } from '../db/engine';
import { type DeviceRow, findRigRevision } from './queries';

export interface Announced {
  readonly rig: { readonly code: string; readonly revision: number };
  readonly rigRevisionId: string;
  readonly channels: readonly string[];
  readonly rateHz: number;
  readonly firmware: string;
}

export interface HelloFlaw { readonly code: FaultCode; readonly message: string }

export async function checkHello(db: Database, hello: Hello, device: DeviceRow, options: LinkOptions): Promise<Announced | HelloFlaw> {
  const { rig, channels, rateHz, firmware } = hello;
  const { rateMinHz, rateMaxHz, channelsMax } = options;
  const revision = await findRigRevision(db, rig.code, rig.revision);
  if (revision === null) return { code: 'RIG_UNKNOWN', message: `There is no revision ${rig.revision} of a rig ${rig.code} in the book.` };
  if (rig.code !== device.rigCode) return { code: 'RIG_MISMATCH', message: `This device is registered for ${device.rigCode}, not for ${rig.code}.` };
  if (channels.length > channelsMax) return { code: 'CHANNELS', message: `${channels.length} channels are named; at most ${channelsMax} are taken.` };
  const parsed = parseChannels(channels, revision.file.cables.length);
  if (!parsed.ok) return { code: 'CHANNELS', message: parsed.error.message };
  if (!(rateHz >= rateMinHz && rateHz <= rateMaxHz)) return { code: 'RATE', message: `The rate is ${rateHz} Hz; it has to lie between ${rateMinHz} and ${rateMaxHz} Hz.` };
  return { rig, rigRevisionId: revision.id, channels, rateHz, firmware };
}
