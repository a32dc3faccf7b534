/** What the seed keeps for itself: that it was here, and the demo device's key, which no page ever shows again. */
import { eq, isNotNull, max } from 'drizzle-orm';
import type { Database } from '../engine';
import { devices, members, participants, people, recordings, rigRevisions, rigs, settings, studies } from '../schema';

const key = 'demo-lab';

export type DemoTrace = { deviceName: string; deviceKey: string };

export async function findDemoTrace(db: Database): Promise<DemoTrace | null> {
  const [row] = await db.select({ value: settings.value }).from(settings).where(eq(settings.key, key));
  return row ? (row.value as DemoTrace) : null;
}

export async function writeDemoTrace(db: Database, trace: DemoTrace): Promise<void> {
  await db.insert(settings).values({ key, value: trace });
}

export async function anybodyThere(db: Database): Promise<boolean> {
  return (await db.select({ id: people.id }).from(people).limit(1)).length > 0;
}

const dayMs = 86_400_000;

/** The lab was furnished before its first visit, and Heron measured anew after it: not at the moment of seeding. */
export async function dateFurniture(db: Database, nowMs: number): Promise<void> {
  const daysAgo = (days: number) => new Date(nowMs - days * dayMs);
  await db.update(people).set({ createdAt: daysAgo(40) });
  await db.update(rigs).set({ createdAt: daysAgo(38) });
  await db.update(rigRevisions).set({ importedAt: daysAgo(38) });
  await db.update(rigRevisions).set({ importedAt: daysAgo(11) }).where(eq(rigRevisions.revision, 2));
  await db.update(devices).set({ createdAt: daysAgo(36) });
  await db.update(devices).set({ revokedAt: daysAgo(24) }).where(isNotNull(devices.revokedAt));
  const lastRecorded = await db.select({ deviceId: recordings.deviceId, at: max(recordings.closedAt) }).from(recordings).groupBy(recordings.deviceId);
  for (const { deviceId, at } of lastRecorded) if (deviceId !== null) await db.update(devices).set({ lastSeenAt: at }).where(eq(devices.id, deviceId));
  await db.update(studies).set({ createdAt: daysAgo(30) });
  await db.update(members).set({ since: daysAgo(30) });
  await db.update(participants).set({ createdAt: daysAgo(28) });
}
