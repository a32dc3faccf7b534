/**
 * The messages of the device link, version 1: a zod schema each, as CONTRACTS of the product lists them.
 *
 * Times that end in `Us` are microseconds: `deviceUs`, `startUs`, `t0Us` and `atUs` of the device's own monotonic clock,
 * `serverUs` of the server's wall clock since 1970. Fields that a schema does not name are ignored, so that a later version
 * may add some.
 */
import { z } from 'zod';
import { faultCodes } from './faults';

export const LINK_VERSION = 1;
export const LINK_PATH = '/link/v1';
export const LINK_PROTOCOL = 'tautbook.link.v1';

/** Microseconds of a clock; whole up to 2^53, fractions allowed. */
const us = z.number().min(0).max(Number.MAX_SAFE_INTEGER);
/** Counts and indices fit a signed 32-bit integer: 24 days at 1 kHz. */
const index = z.number().int().min(0).max(2_147_483_647);
const block: z.ZodType<Uint8Array> = z.instanceof(Uint8Array);
export const runName = z.string().min(1).max(100);

export const hello = z.object({
  type: z.literal('hello'),
  link: z.literal(LINK_VERSION),
  rig: z.object({ code: z.string().min(1).max(100), revision: z.number().int().positive() }),
  /** Judged with the fault RATE, not with the frame. */
  rateHz: z.number().or(z.nan()),
  channels: z.array(z.string().max(64)).max(1024),
  firmware: z.string().max(200),
  deviceUs: us,
});

export const deviceClock = z.object({ type: z.literal('clock'), id: index, deviceUs: us });

export const begin = z.object({
  type: z.literal('begin'),
  /** The armed trial, or null for a run that someone files later. */
  trial: z.string().max(100).nullable(),
  run: runName,
  startUs: us,
});

export const batch = z.object({
  type: z.literal('batch'),
  run: runName,
  n: index,
  /** Index of the first sample; ahead of what came before where the device lost samples. */
  first: index,
  count: index,
  t0Us: us,
  /** Little-endian uint32 for each sample, µs since t0Us; left out when samples are a period apart. */
  dtUs: block.optional(),
  /** Little-endian float32, channel after channel, `count` values each. */
  data: block,
});

export const mark = z.object({ type: z.literal('mark'), run: runName, atUs: us, label: z.string().min(1).max(200) });

export const end = z.object({
  type: z.literal('end'),
  run: runName,
  batches: index,
  samples: index,
  reason: z.enum(['done', 'stopped', 'fault']),
});

export const deviceMessage = z.discriminatedUnion('type', [hello, deviceClock, begin, batch, mark, end]);

export const welcome = z.object({
  type: z.literal('welcome'),
  device: z.string(),
  serverUs: us,
  limits: z.object({ batchSamples: index, frameBytes: index, unacked: index }),
  /** Runs of this device that are not ended, and the batch that each wants next. */
  resume: z.array(z.object({ run: runName, next: index })),
});
export const serverClock = z.object({ type: z.literal('clock'), id: index, serverUs: us });
export const arm = z.object({ type: z.literal('arm'), trial: z.string(), channels: z.array(z.string()).optional() });
export const disarm = z.object({ type: z.literal('disarm'), trial: z.string() });
export const stop = z.object({ type: z.literal('stop'), run: runName });
export const ack = z.object({
  type: z.literal('ack'),
  run: runName,
  /** Every batch below is durable. After begin it is what the run wants: 0 for a new one. */
  next: index,
  /** True in the acknowledgement of `end`: the recording is closed and everything is durable. */
  ended: z.boolean().optional(),
});
export const pace = z.object({ type: z.literal('pace'), unacked: index });
export const fault = z.object({
  type: z.literal('fault'),
  code: z.enum(faultCodes),
  message: z.string(),
  fatal: z.boolean(),
  run: runName.optional(),
  /** For BATCH_ORDER the batch that is wanted, otherwise the batch that was refused. */
  n: index.optional(),
});

export const serverMessage = z.discriminatedUnion('type', [welcome, serverClock, arm, disarm, stop, ack, pace, fault]);

export type Hello = z.infer<typeof hello>;
export type DeviceClock = z.infer<typeof deviceClock>;
export type Begin = z.infer<typeof begin>;
export type Batch = z.infer<typeof batch>;
export type Mark = z.infer<typeof mark>;
export type End = z.infer<typeof end>;
export type DeviceMessage = z.infer<typeof deviceMessage>;
export type Welcome = z.infer<typeof welcome>;
export type ServerClock = z.infer<typeof serverClock>;
export type Arm = z.infer<typeof arm>;
export type Ack = z.infer<typeof ack>;
export type Pace = z.infer<typeof pace>;
export type Fault = z.infer<typeof fault>;
export type ServerMessage = z.infer<typeof serverMessage>;
