/** Keeps asking a device for its time: a burst after hello, then a round trip now and then. */
import { addRoundTrip, type ClockEstimate, type ClockFilter, estimateClock, type LinkOptions, newClockFilter, type ServerClock, wallTimeOf, type WallTime } from '@shared/link';
import { serverUs } from './server-clock';

/** A device that answers late is asked on, but not remembered for ever. */
const ASKED_KEPT = 32;

export class ClockWatch {
  private filter: ClockFilter = newClockFilter;
  private readonly asked = new Map<number, number>();
  private id = 0;
  private answers = 0;
  private readonly timers: NodeJS.Timeout[] = [];

  constructor(
    private readonly options: Pick<LinkOptions, 'clockBurst' | 'clockBurstEveryMs' | 'clockEveryMs'>,
    private readonly send: (message: ServerClock) => void,
    /** After the burst and after every further answer. */
    private readonly onEstimate: (estimate: ClockEstimate) => void,
  ) {}

  start(): void {
    const burst = setInterval(() => {
      this.ask();
      if (this.id >= this.options.clockBurst) clearInterval(burst);
    }, this.options.clockBurstEveryMs);
    this.timers.push(burst, setInterval(() => this.ask(), this.options.clockEveryMs));
    this.ask();
  }

  stop(): void {
    for (const timer of this.timers) clearInterval(timer);
  }

  private ask(): void {
    this.id += 1;
    if (this.asked.size >= ASKED_KEPT) this.asked.clear();
    const now = serverUs();
    this.asked.set(this.id, now);
    this.send({ type: 'clock', id: this.id, serverUs: now });
  }

  /** @param answeredUs server's clock when the answer came. An answer to nothing that was asked says nothing. */
  answer(id: number, deviceUs: number, answeredUs: number): void {
    const askedUs = this.asked.get(id);
    if (askedUs === undefined) return;
    this.asked.delete(id);
    this.filter = addRoundTrip(this.filter, { askedUs, answeredUs, deviceUs });
    this.answers += 1;
    const estimate = estimateClock(this.filter, answeredUs);
    if (estimate !== null && this.answers >= this.options.clockBurst) this.onEstimate(estimate);
  }

  /** Wall time of a moment of the device's clock; null before the first answer. */
  wallTime(deviceUs: number): WallTime | null {
    const estimate = estimateClock(this.filter, serverUs());
    return estimate === null ? null : wallTimeOf(estimate, deviceUs);
  }
}
