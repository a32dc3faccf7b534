import { asc, eq, isNull, and } from 'drizzle-orm';
import type { Database } from '../../db/engine';
import { devices, rigs } from '../../db/schema';

const rows = (db: Database) => db.select({
  id: devices.id, name: devices.name, rigId: devices.rigId, rigCode: rigs.code, keyHint: devices.keyHint, faults: devices.faults, clock: devices.clock,
  lastSeenAt: devices.lastSeenAt, createdAt: devices.createdAt, revokedAt: devices.revokedAt,
}).from(devices).innerJoin(rigs, eq(rigs.id, devices.rigId));

export type DeviceRow = Awaited<ReturnType<typeof allDevices>>[number];

export const allDevices = (db: Database) => rows(db).orderBy(asc(devices.name), asc(devices.id));

export async function findDevice(db: Database, id: string): Promise<DeviceRow | null> {
  const [row] = await rows(db).where(eq(devices.id, id));
  return row ?? null;
}

export async function rigExists(db: Database, rigId: string): Promise<boolean> {
  return (await db.select({ id: rigs.id }).from(rigs).where(eq(rigs.id, rigId))).length > 0;
}

export async function insertDevice(db: Database, values: { name: string; rigId: string; keyHash: string; keyHint: string }): Promise<string> {
  const [row] = await db.insert(devices).values(values).returning({ id: devices.id });
  if (!row) throw new Error('The device was not written');
  return row.id;
}

/** A device that is revoked already keeps its first date. */
export async function markRevoked(db: Database, id: string, at: Date): Promise<void> {
  await db.update(devices).set({ revokedAt: at }).where(and(eq(devices.id, id), isNull(devices.revokedAt)));
}
