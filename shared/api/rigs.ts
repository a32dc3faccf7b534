/** Rigs and their revisions, and the devices that stream. */
import { z } from 'zod';
import { rigFileSchema } from '../rig/rig-file';
import { deviceId, line, rigId, rigRevisionId, wallTime } from './common';
import { route } from './contract';

export const rigRevision = z.object({
  id: rigRevisionId,
  rigId,
  code: z.string(),
  title: z.string(),
  revision: z.number().int().positive(),
  /** What changed, in the importer's words. */
  remark: z.string(),
  /** SHA-256 of the canonical JSON of the file, hex. */
  digest: z.string(),
  cableCount: z.number().int(),
  importedBy: z.string(),
  importedAt: wallTime,
  file: rigFileSchema,
});
export type RigRevision = z.infer<typeof rigRevision>;

export const rigSummary = z.object({
  id: rigId,
  code: z.string(),
  title: z.string(),
  cableCount: z.number().int(),
  revisions: z.number().int(),
  latest: rigRevisionId,
});
export type RigSummary = z.infer<typeof rigSummary>;

export const listRigs = route({ id: 'rigs.list', method: 'GET', path: '/api/rigs', summary: 'Rigs of the lab', response: z.object({ rigs: z.array(rigSummary) }) });

export const getRig = route({
  id: 'rigs.get',
  method: 'GET',
  path: '/api/rigs/:rigId',
  summary: 'One rig with all its revisions, newest first',
  params: z.object({ rigId }),
  response: z.object({ rig: rigSummary, revisions: z.array(rigRevision) }),
});

export const importRig = route({
  id: 'rigs.import',
  method: 'POST',
  path: '/api/rigs',
  summary: 'Import a rig file: a new rig, or the next revision of the rig with that code',
  /** `file` is checked by the rig rules and answered with every fault found, so it is open here. */
  body: z.object({ file: z.unknown(), remark: z.string().trim().max(400).default('') }),
  response: rigRevision,
});

export const getRigRevision = route({
  id: 'rigRevisions.get',
  method: 'GET',
  path: '/api/rig-revisions/:rigRevisionId',
  summary: 'One revision of a rig, as it will stay for ever',
  params: z.object({ rigRevisionId }),
  response: rigRevision,
});

export const device = z.object({
  id: deviceId,
  name: z.string(),
  rigId,
  rigCode: z.string(),
  keyHint: z.string(),
  state: z.enum(['registered', 'connected', 'recording', 'revoked']),
  lastSeenAt: wallTime.nullable(),
  createdAt: wallTime,
  revokedAt: wallTime.nullable(),
  /** Faults the link answered to this device, by code, since it was registered. */
  faults: z.record(z.string(), z.number().int()),
  clock: z.object({ offsetUs: z.number(), uncertaintyUs: z.number() }).nullable(),
});
export type Device = z.infer<typeof device>;

export const listDevices = route({ id: 'devices.list', method: 'GET', path: '/api/devices', summary: 'Devices of the lab', response: z.object({ devices: z.array(device) }) });

export const registerDevice = route({
  id: 'devices.register',
  method: 'POST',
  path: '/api/devices',
  summary: 'Register a device; its key is in this answer and nowhere else',
  body: z.object({ name: line(80), rigId }),
  response: z.object({ device, key: z.string() }),
});

export const revokeDevice = route({
  id: 'devices.revoke',
  method: 'POST',
  path: '/api/devices/:deviceId/revoke',
  summary: 'Revoke a device: its key stops working at once',
  params: z.object({ deviceId }),
  response: device,
});
