/** What the seed keeps for itself: that it was here, and the demo device's key, which no page ever shows again. */
import { eq } from 'drizzle-orm';
import type { Database } from '../engine';
import { people, settings } from '../schema';

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
