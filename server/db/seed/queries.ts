import { count, eq } from 'drizzle-orm';
import type { Database } from '../engine';
import { people, recordings, settings } from '../schema';

const key = 'demo-lab';

export async function findDemoLab(db: Database): Promise<unknown> {
  const [row] = await db.select({ value: settings.value }).from(settings).where(eq(settings.key, key));
  return row?.value ?? null;
}

export async function keepDemoLab(db: Database, value: unknown): Promise<void> {
  await db.insert(settings).values({ key, value });
}

export async function hasPeople(db: Database): Promise<boolean> {
  const [row] = await db.select({ n: count() }).from(people);
  return (row?.n ?? 0) > 0;
}

export async function fileUnder(db: Database, recordingId: string, trialId: string): Promise<void> {
  await db.update(recordings).set({ trialId }).where(eq(recordings.id, recordingId));
}
