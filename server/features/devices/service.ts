/** Devices of the lab: registered with a key that is shown once, revoked at once. */
import { createHash, randomBytes } from 'node:crypto';
import { deviceId, rigId } from '@shared/api/common';
import type { Device } from '@shared/api/rigs';
import type { Database } from '../../db/engine';
import type { DeviceControl } from '../../ingest/ports';
import { refuse } from './errors';
import { allDevices, type DeviceRow, findDevice, insertDevice, markRevoked, rigExists } from './queries';

/** What is stored of a key: SHA-256, hex. Keys are 256 random bits, so neither salt nor slow hash is needed. */
export const hashKey = (key: string): string => createHash('sha256').update(key).digest('hex');

export type DeviceService = ReturnType<typeof createDeviceService>;

export function createDeviceService(db: Database, control: DeviceControl) {
  const toDevice = (row: DeviceRow): Device => {
    const id = deviceId.parse(row.id);
    const linked = control.stateOf(id);
    return {
      id, name: row.name, rigId: rigId.parse(row.rigId), rigCode: row.rigCode, keyHint: row.keyHint, faults: row.faults,
      state: row.revokedAt ? 'revoked' : linked === 'gone' ? 'registered' : linked,
      lastSeenAt: row.lastSeenAt?.toISOString() ?? null,
      createdAt: row.createdAt.toISOString(),
      revokedAt: row.revokedAt?.toISOString() ?? null,
      clock: row.clock ? { offsetUs: row.clock.offsetUs, uncertaintyUs: row.clock.uncertaintyUs } : null,
    };
  };

  async function get(id: string): Promise<Device> {
    const row = await findDevice(db, id);
    if (row === null) throw refuse('DEVICE_UNKNOWN');
    return toDevice(row);
  }

  return {
    async list(): Promise<Device[]> {
      return (await allDevices(db)).map(toDevice);
    },

    async register(name: string, ofRig: string): Promise<{ device: Device; key: string }> {
      if (!(await rigExists(db, ofRig))) throw refuse('DEVICE_RIG');
      const key = `tbk_${randomBytes(32).toString('base64url')}`;
      const id = await insertDevice(db, { name, rigId: ofRig, keyHash: hashKey(key), keyHint: `tbk_…${key.slice(-4)}` });
      return { device: await get(id), key };
    },

    async revoke(id: string): Promise<Device> {
      const device = await get(id);
      await markRevoked(db, device.id, new Date());
      control.revoke(device.id);
      return get(id);
    },
  };
}
