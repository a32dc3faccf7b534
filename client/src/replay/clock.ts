/**
 * The one clock of a replay: where the reading line stands, and how it moves.
 *
 * Everything that draws listens here; nothing keeps a time of its own. While the clock stands no frame is asked for,
 * so a paused replay costs nothing. Times are seconds of the recording's own clock.
 */
import { clampTo, lengthOf, type Span } from './span';

/** A twentieth to sixteen times. */
export const speeds = [1 / 20, 1 / 10, 1 / 5, 1 / 2, 1, 2, 4, 8, 16] as const;

/** What changes rarely: buttons show it. The position itself is `atS` and changes every frame. */
export interface ClockState {
  readonly playing: boolean;
  readonly speed: number;
  readonly loop: Span | null;
  readonly extent: Span;
}

export interface Clock {
  readonly atS: number;
  readonly state: ClockState;
  play(): void;
  pause(): void;
  toggle(): void;
  setSpeed(speed: number): void;
  /** Next of `speeds` up (1) or down (-1). */
  changeSpeed(direction: 1 | -1): void;
  seek(atS: number): void;
  /** Moves by seconds and stops playing. */
  stepS(deltaS: number): void;
  /** Moves by whole samples and stops playing. */
  stepSamples(count: number): void;
  setLoop(loop: Span | null): void;
  setExtent(extent: Span): void;
  /** Told at every change of `atS`; while playing once a frame. Returns how to stop listening. */
  onMoment(listener: (atS: number) => void): () => void;
  /** Told when `state` changed. */
  onState(listener: () => void): () => void;
}

export interface ClockPorts {
  /** Milliseconds that only grow. */
  readonly nowMs: () => number;
  readonly requestFrame: (draw: () => void) => number;
  readonly cancelFrame: (id: number) => void;
  /** Time of the sample `count` samples away from the one at `atS`; null where the samples are not at hand. */
  readonly sampleStep?: (atS: number, count: number) => number | null;
}

/** A frame longer than this was a sleeping tab, not time that somebody watched. */
const LONGEST_FRAME_S = 0.25;

export const browserPorts = (sampleStep?: ClockPorts['sampleStep']): ClockPorts => ({
  nowMs: () => performance.now(),
  requestFrame: (draw) => requestAnimationFrame(draw),
  cancelFrame: (id) => cancelAnimationFrame(id),
  ...(sampleStep ? { sampleStep } : {}),
});

/** @param rateHz nominal sample rate, for stepping where the samples are not loaded */
export function createClock(extent: Span, rateHz: number, ports: ClockPorts, startAtS = extent.fromS): Clock {
  const momentListeners = new Set<(atS: number) => void>();
  const stateListeners = new Set<() => void>();
  let atS = clampTo(extent, startAtS);
  let state: ClockState = { playing: false, speed: 1, loop: null, extent };
  let frame: number | null = null;
  let lastMs = 0;

  const change = (part: Partial<ClockState>) => {
    state = { ...state, ...part };
    for (const listener of [...stateListeners]) listener();
  };

  const moveTo = (nextS: number) => {
    const clamped = clampTo(state.extent, nextS);
    if (clamped === atS) return;
    atS = clamped;
    for (const listener of [...momentListeners]) listener(atS);
  };

  const stopFrames = () => {
    if (frame !== null) ports.cancelFrame(frame);
    frame = null;
  };

  const draw = () => {
    frame = null;
    if (!state.playing) return;
    const nowMs = ports.nowMs();
    const elapsedS = Math.min(LONGEST_FRAME_S, Math.max(0, (nowMs - lastMs) / 1000));
    lastMs = nowMs;
    const next = afterPlaying(atS, elapsedS * state.speed, state);
    moveTo(next);
    if (!state.loop && next >= state.extent.toS) {
      change({ playing: false });
      return;
    }
    frame = ports.requestFrame(draw);
  };

  const pause = () => {
    stopFrames();
    if (state.playing) change({ playing: false });
  };

  const play = () => {
    if (state.playing || lengthOf(state.extent) <= 0) return;
    const { loop } = state;
    if (loop && (atS < loop.fromS || atS >= loop.toS)) moveTo(loop.fromS);
    else if (!loop && atS >= state.extent.toS) moveTo(state.extent.fromS);
    lastMs = ports.nowMs();
    change({ playing: true });
    frame = ports.requestFrame(draw);
  };

  return {
    get atS() {
      return atS;
    },
    get state() {
      return state;
    },
    play,
    pause,
    toggle: () => (state.playing ? pause() : play()),
    setSpeed: (speed) => change({ speed: Math.min(16, Math.max(1 / 20, speed)) }),
    changeSpeed(direction) {
      const next = direction > 0 ? speeds.find((speed) => speed > state.speed + 1e-9) : speeds.findLast((speed) => speed < state.speed - 1e-9);
      if (next !== undefined) change({ speed: next });
    },
    seek: moveTo,
    stepS(deltaS) {
      pause();
      moveTo(atS + deltaS);
    },
    stepSamples(count) {
      pause();
      moveTo(ports.sampleStep?.(atS, count) ?? (Math.round(atS * rateHz) + count) / rateHz);
    },
    setLoop(loop) {
      change({ loop: loop && lengthOf(loop) > 0 ? { fromS: clampTo(state.extent, loop.fromS), toS: clampTo(state.extent, loop.toS) } : null });
    },
    setExtent(next) {
      if (next.fromS === state.extent.fromS && next.toS === state.extent.toS) return;
      change({ extent: next });
      moveTo(atS);
    },
    onMoment(listener) {
      momentListeners.add(listener);
      return () => momentListeners.delete(listener);
    },
    onState(listener) {
      stateListeners.add(listener);
      return () => stateListeners.delete(listener);
    },
  };
}

/** Where the line stands after playing for `deltaS` of recording time: a loop comes round, the end holds. */
export function afterPlaying(atS: number, deltaS: number, { loop, extent }: Pick<ClockState, 'loop' | 'extent'>): number {
  const nextS = atS + deltaS;
  if (loop && atS < loop.toS && nextS >= loop.toS) return loop.fromS + ((nextS - loop.fromS) % lengthOf(loop));
  return Math.min(nextS, extent.toS);
}
