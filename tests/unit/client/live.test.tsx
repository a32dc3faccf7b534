// @vitest-environment jsdom
import { afterEach, beforeEach, expect, test, vi } from 'vitest';
import { joinRoom, tellReading, type RoomState } from '@client/lib/live';
import { id } from '../../support/client-pages';

const room = `trial:${id(1)}`;
const other = `session:${id(2)}`;

/** The server's end of the line, by hand. */
class Line {
  static readonly OPEN = 1;
  static all: Line[] = [];
  readyState = 0;
  binaryType = '';
  said: unknown[] = [];
  onopen: (() => void) | null = null;
  onmessage: ((event: { data: unknown }) => void) | null = null;
  onclose: (() => void) | null = null;
  constructor(readonly url: URL) {
    Line.all.push(this);
  }
  send(text: string): void {
    this.said.push(JSON.parse(text));
  }
  close(): void {
    this.readyState = 3;
    this.onclose?.();
  }
  open(): void {
    this.readyState = 1;
    this.onopen?.();
  }
  answer(message: object): void {
    this.onmessage?.({ data: JSON.stringify(message) });
  }
}

const line = (n: number): Line => {
  const found = Line.all[n];
  if (!found) throw new Error(`no line ${n}`);
  return found;
};

beforeEach(() => {
  vi.useFakeTimers();
  Line.all = [];
  vi.stubGlobal('WebSocket', Line);
});
afterEach(() => {
  // The line lingers a moment after the last room; the next test begins without it.
  vi.advanceTimersByTime(2_000);
  vi.useRealTimers();
  vi.unstubAllGlobals();
});

test('all rooms of a page share one line, which closes after the last one left', () => {
  const leave = [joinRoom(room, {}), joinRoom(room, {}), joinRoom(other, {})];
  expect(Line.all).toHaveLength(1);
  expect(line(0).url.protocol + line(0).url.pathname).toBe('ws:/live/v1');
  line(0).open();
  expect(line(0).said).toEqual([{ type: 'join', room }, { type: 'join', room: other }]);
  leave[0]?.();
  expect(line(0).said).toHaveLength(2);
  leave[1]?.();
  expect(line(0).said.at(-1)).toEqual({ type: 'leave', room });
  leave[2]?.();
  expect(line(0).said.at(-1)).toEqual({ type: 'leave', room: other });
  // A page that is turned joins the next room on the same line.
  vi.advanceTimersByTime(500);
  const leaveNext = joinRoom(room, {});
  vi.advanceTimersByTime(60_000 - 59_000);
  expect(Line.all).toHaveLength(1);
  leaveNext();
  vi.advanceTimersByTime(2_000);
  expect(line(0).readyState).toBe(3);
});

test('a broken line is told, tried again with growing waits, and rooms are joined anew', () => {
  const states: RoomState[] = [];
  const leave = joinRoom(room, { onState: (state) => states.push(state) });
  line(0).open();
  line(0).answer({ type: 'joined', room, present: [] });
  line(0).close();
  vi.advanceTimersByTime(400);
  expect(Line.all).toHaveLength(2);
  line(1).close();
  vi.advanceTimersByTime(400);
  expect(Line.all).toHaveLength(2);
  vi.advanceTimersByTime(400);
  expect(Line.all).toHaveLength(3);
  line(2).open();
  line(2).answer({ type: 'joined', room, present: [] });
  expect(line(2).said).toEqual([{ type: 'join', room }]);
  expect(states).toEqual(['joined', 'broken', 'joined']);
  leave();
});

test('messages reach the listeners of their room alone; what a newer server says is skipped; frames go through raw', () => {
  const heard: string[] = [];
  const frames: Uint8Array[] = [];
  const leave = [joinRoom(room, { onMessage: (message) => heard.push(message.type), onBytes: (frame) => frames.push(frame) }), joinRoom(other, { onMessage: () => heard.push('wrong room') })];
  line(0).open();
  line(0).answer({ type: 'reading', room, who: { id: 'p', name: 'Owen' }, atS: 1.5 });
  line(0).answer({ type: 'weather', room });
  line(0).onmessage?.({ data: 'not json' });
  line(0).onmessage?.({ data: new Uint8Array([1, 2, 3]).buffer });
  expect(heard).toEqual(['reading']);
  expect(frames.map((frame) => [...frame])).toEqual([[1, 2, 3]]);
  tellReading(room, 2);
  expect(line(0).said.at(-1)).toEqual({ type: 'reading', room, atS: 2 });
  for (const go of leave) go();
});

test('a line that says nothing for too long counts as dead', () => {
  const states: RoomState[] = [];
  const leave = joinRoom(room, { onState: (state) => states.push(state) });
  line(0).open();
  vi.advanceTimersByTime(20_000);
  expect(line(0).said.at(-1)).toEqual({ type: 'alive' });
  vi.advanceTimersByTime(40_000);
  expect(states.at(-1)).toBe('broken');
  leave();
});
