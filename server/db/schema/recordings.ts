/**
 * Recordings: what a device's run became.
 *
 * A run's batches are durable in one of two places: `recording_chunks` (about a second each, encoded) or, younger than
 * that, `recording_tail` (batches as they came). A chunk and the removal of the tail rows that it replaces are one
 * transaction. `nextBatch` says which batch is wanted next: every one below is durable.
 */
import { bigint, doublePrecision, index, integer, jsonb, pgTable, primaryKey, text, unique, uuid } from 'drizzle-orm/pg-core';
import { at, bytes, id } from './columns';
import { devices, rigRevisions } from './rigs';
import { trials } from './sessions';

export const recordings = pgTable('recordings', {
  id: id(),
  /** null: it came as a file, not over the link. */
  deviceId: uuid('device_id').references(() => devices.id),
  /** Made by the device, unique to it; for a file its name. */
  run: text('run').notNull(),
  /** null: unfiled. */
  trialId: uuid('trial_id').references(() => trials.id),
  rigRevisionId: uuid('rig_revision_id').notNull().references(() => rigRevisions.id),
  state: text('state').$type<'growing' | 'closed'>().notNull().default('growing'),
  rateHz: doublePrecision('rate_hz').notNull(),
  channels: jsonb('channels').$type<string[]>().notNull(),
  firmware: text('firmware').notNull().default(''),
  /** Device clock at the start, µs. */
  startUs: bigint('start_us', { mode: 'number' }).notNull(),
  nextBatch: integer('next_batch').notNull().default(0),
  samples: integer('samples').notNull().default(0),
  /** Sample index that is expected next: stays ahead of `samples` where the device lost some. */
  nextSample: integer('next_sample').notNull().default(0),
  lastUs: doublePrecision('last_us').notNull().default(0),
  gaps: jsonb('gaps').$type<{ startS: number; endS: number; missing: number }[]>().notNull().default([]),
  marks: jsonb('marks').$type<{ atS: number; label: string }[]>().notNull().default([]),
  /** Wall time of the start by the server's clock, and the bound of its error. */
  startedAt: at('started_at').notNull(),
  startUncertaintyUs: doublePrecision('start_uncertainty_us'),
  endReason: text('end_reason').$type<'done' | 'stopped' | 'fault' | 'lost'>(),
  digest: text('digest'),
  /** Of an imported file: how many decimals its time and its channels were printed with, to print the same digits again. */
  decimals: jsonb('decimals').$type<{ time: number; channels: number[] }>(),
  statistics: jsonb('statistics').$type<Record<string, { min: number; max: number; mean: number; missing: number }>>(),
  closedAt: at('closed_at'),
  /** When the flags of this recording were found; null while they are not. */
  flagsFoundAt: at('flags_found_at'),
}, (table) => [
  unique('recordings_run').on(table.deviceId, table.run),
  index('recordings_trial').on(table.trialId),
]);

export const recordingChunks = pgTable('recording_chunks', {
  recordingId: uuid('recording_id').notNull().references(() => recordings.id, { onDelete: 'cascade' }),
  n: integer('n').notNull(),
  /** Index of the first sample, count of samples, and first and last time in µs since the start. */
  first: integer('first').notNull(),
  count: integer('count').notNull(),
  t0Us: doublePrecision('t0_us').notNull(),
  t1Us: doublePrecision('t1_us').notNull(),
  data: bytes('data').notNull(),
}, (table) => [primaryKey({ columns: [table.recordingId, table.n] })]);

export const recordingTail = pgTable('recording_tail', {
  recordingId: uuid('recording_id').notNull().references(() => recordings.id, { onDelete: 'cascade' }),
  /** First batch number in this row. */
  batch: integer('batch').notNull(),
  batches: integer('batches').notNull(),
  data: bytes('data').notNull(),
}, (table) => [primaryKey({ columns: [table.recordingId, table.batch] })]);

/** Min/max/mean blocks: `level` 1 is the finest; made as chunks arrive, can be made again from them. */
export const recordingPyramid = pgTable('recording_pyramid', {
  recordingId: uuid('recording_id').notNull().references(() => recordings.id, { onDelete: 'cascade' }),
  level: integer('level').notNull(),
  n: integer('n').notNull(),
  t0Us: doublePrecision('t0_us').notNull(),
  t1Us: doublePrecision('t1_us').notNull(),
  data: bytes('data').notNull(),
}, (table) => [primaryKey({ columns: [table.recordingId, table.level, table.n] })]);
