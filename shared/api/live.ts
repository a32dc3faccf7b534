/**
 * The live socket of the browser: `GET /live/v1`, signed in by the session cookie, same origin.
 *
 * Text frames are JSON, binary frames are one MessagePack map (`liveSamples`). A reader joins rooms; a room that does
 * not exist and one that the reader may not see are refused alike. Viewers get what they can take: when a socket is
 * slow, sample frames are thinned and older ones dropped, never queued without bound.
 */
import { z } from 'zod';
import { flag, trialState } from './sessions';
import { note } from './notes';
import { deviceId, personRef, sessionId, trialId } from './common';

/** `study:<id>` is the worklist of a study’s flags; `session:<id>` shows what a session is doing now; `trial:<id>` is the reading room of a trial; `devices` is the lab's devices. */
export const roomName = z.string().regex(/^(study:[0-9a-f-]{36}|session:[0-9a-f-]{36}|trial:[0-9a-f-]{36}|devices)$/);

export const liveFromClient = z.discriminatedUnion('type', [
  z.object({ type: z.literal('join'), room: roomName }),
  z.object({ type: z.literal('leave'), room: roomName }),
  /** Where the reader's line stands in a trial, for the others in its room. */
  z.object({ type: z.literal('reading'), room: roomName, atS: z.number().min(0) }),
  z.object({ type: z.literal('alive') }),
]);
export type LiveFromClient = z.infer<typeof liveFromClient>;

export const liveFlag = flag.omit({ id: true, cause: true }).extend({ open: z.boolean() });

export const liveFromServer = z.discriminatedUnion('type', [
  z.object({ type: z.literal('joined'), room: roomName, present: z.array(personRef) }),
  z.object({ type: z.literal('refused'), room: z.string(), code: z.literal('ROOM_UNKNOWN') }),
  z.object({ type: z.literal('present'), room: roomName, present: z.array(personRef) }),
  z.object({ type: z.literal('reading'), room: roomName, who: personRef, atS: z.number() }),
  /** A note appeared or changed. `mine` in it is from the receiver's view. */
  z.object({ type: z.literal('note'), room: roomName, note }),
  z.object({ type: z.literal('trial'), room: roomName, trialId, state: trialState }),
  z.object({ type: z.literal('flags'), room: roomName, trialId, flags: z.array(liveFlag) }),
  /** Flags of a closed recording are now in the book: ask for them again. */
  z.object({ type: z.literal('found'), room: roomName, trialId }),
  /** Flags of this trial were judged: ask for the verdicts again. */
  z.object({ type: z.literal('verdicts'), room: roomName, trialId }),
  z.object({ type: z.literal('mark'), room: roomName, trialId, atS: z.number(), label: z.string() }),
  z.object({ type: z.literal('device'), room: roomName, deviceId, state: z.enum(['connected', 'recording', 'gone']) }),
  z.object({ type: z.literal('session'), room: roomName, sessionId }),
  z.object({ type: z.literal('alive') }),
]);
export type LiveFromServer = z.infer<typeof liveFromServer>;

/**
 * Every so many samples of a running trial one goes to the screens: about 250 a second, more than a stave of ten seconds has
 * pixels.
 */
export const shownEvery = (rateHz: number): number => Math.max(1, Math.round(rateHz / 250));

/** A thinned stretch of a running trial (MessagePack): newest samples of all channels, about 30 frames a second. */
export const liveSamples = z.object({
  type: z.literal('samples'),
  trial: z.string(),
  recording: z.string(),
  /** Server's monotonic µs when the newest sample arrived, to measure the way to the screen. */
  arrivedUs: z.number(),
  count: z.number().int(),
  /** float64 seconds since the recording's start. */
  timesS: z.custom<Uint8Array>((value) => value instanceof Uint8Array, 'Bytes'),
  /** float32, channel after channel, `count` each; taken samples, thinned to what the room is shown. */
  values: z.custom<Uint8Array>((value) => value instanceof Uint8Array, 'Bytes'),
});
export type LiveSamples = z.infer<typeof liveSamples>;
