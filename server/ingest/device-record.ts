/** What is kept of a device: faults by code, its clock, when it was last seen. Written at most once a second, never on the path of samples. */
import type { Logger } from 'pino';
import type { FaultCode } from '@shared/link';
import type { Database } from '../db/engine';
import { faultText } from './fault-text';
import { type DeviceRow, touchDevice } from './queries';

const WRITE_EVERY_MS = 1_000;

type Values = Parameters<typeof touchDevice>[2];

export class DeviceRecord {
  private waiting: Values = {};
  /** Counted since the last write. */
  private faults: Partial<Record<FaultCode, number>> = {};
  private timer: NodeJS.Timeout | undefined;
  private writing: Promise<void> = Promise.resolve();

  constructor(private readonly device: DeviceRow, private readonly db: Database, private readonly log: Logger) {}

  fault(code: FaultCode): void {
    this.faults[code] = (this.faults[code] ?? 0) + 1;
    this.set({});
  }

  set(values: Values): void {
    Object.assign(this.waiting, values);
    this.timer ??= setTimeout(() => void this.write(), WRITE_EVERY_MS);
  }

  /** Writes what waits now. Never fails: what could not be written is written with the next. */
  write(): Promise<void> {
    clearTimeout(this.timer);
    this.timer = undefined;
    this.writing = this.writing.then(async () => {
      const values = { ...this.waiting, lastSeenAt: new Date() };
      const { faults } = this;
      this.waiting = {};
      this.faults = {};
      try {
        await touchDevice(this.db, this.device.id, values, faults);
      } catch (error) {
        this.waiting = { ...values, ...this.waiting };
        for (const code of Object.keys(faults) as FaultCode[]) this.faults[code] = (this.faults[code] ?? 0) + (faults[code] ?? 0);
        this.log.warn({ message: faultText(error) }, 'a device’s state was not stored');
      }
    });
    return this.writing;
  }
}
