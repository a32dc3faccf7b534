/**
 * Frames of the device link: a message in, bytes out, and back, checked.
 *
 * A batch is taken apart by hand on its way in, because it comes hundreds of times a second; `isBatch` and the schema say
 * the same, which a test holds.
 */
import { pack, unpack } from './pack';
import { frameFlaw } from './standard';
import { deviceMessage, serverMessage, type Batch, type DeviceMessage, type ServerMessage } from './messages';

export type Decoded<M> = { readonly ok: true; readonly message: M } | { readonly ok: false; readonly problem: string; readonly type?: string; readonly run?: string; readonly n?: number; readonly link?: number };

export const encodeDeviceMessage = (message: DeviceMessage): Uint8Array => pack(message);
export const encodeServerMessage = (message: ServerMessage): Uint8Array => pack(message);

/**
 * What a device sent. `data` and `dtUs` of a batch are views into the frame.
 *
 * @returns the message, or what is wrong with the frame together with the type, run and number that could be read from it
 */
export const decodeDeviceMessage = (bytes: Uint8Array): Decoded<DeviceMessage> => decode(bytes, deviceMessage, true);

/** What a server sent. */
export const decodeServerMessage = (bytes: Uint8Array): Decoded<ServerMessage> => decode(bytes, serverMessage, false);

interface Schema<M> {
  safeParse(value: unknown): { success: true; data: M } | { success: false; error: { issues: readonly { path: readonly PropertyKey[]; message: string }[] } };
}

function decode<M>(bytes: Uint8Array, schema: Schema<M>, quickBatch: boolean): Decoded<M> {
  const flaw = frameFlaw(bytes);
  if (flaw !== null) return { ok: false, problem: `The frame is not one map of standard MessagePack: ${flaw}.` };
  let value: unknown;
  try {
    value = unpack(bytes);
  } catch (error) {
    return { ok: false, problem: `The frame is not MessagePack: ${error instanceof Error ? error.message.slice(0, 120) : 'unreadable'}.` };
  }
  if (quickBatch && isBatch(value)) return { ok: true, message: value as M };
  const parsed = schema.safeParse(value);
  if (parsed.success) return { ok: true, message: parsed.data };
  const issue = parsed.error.issues[0];
  return { ok: false, problem: `Field ${issue?.path.map(String).join('.') || 'type'}: ${issue?.message ?? 'not as described'}.`, ...readable(value) };
}

const whole = (value: unknown): value is number => Number.isInteger(value) && (value as number) >= 0 && (value as number) <= 2_147_483_647;

/** The same as the schema of `batch`, without allocating. */
export function isBatch(value: unknown): value is Batch {
  const b = value as Partial<Batch> | null;
  return typeof b === 'object' && b !== null && b.type === 'batch'
    && typeof b.run === 'string' && b.run.length >= 1 && b.run.length <= 100
    && whole(b.n) && whole(b.first) && whole(b.count)
    && typeof b.t0Us === 'number' && b.t0Us >= 0 && b.t0Us <= Number.MAX_SAFE_INTEGER
    && b.data instanceof Uint8Array
    && (b.dtUs === undefined || b.dtUs instanceof Uint8Array);
}

function readable(value: unknown): { type?: string; run?: string; n?: number; link?: number } {
  const map = value as Record<string, unknown>;
  return {
    ...(typeof map['type'] === 'string' ? { type: map['type'].slice(0, 40) } : {}),
    ...(typeof map['run'] === 'string' && map['run'].length >= 1 && map['run'].length <= 100 ? { run: map['run'] } : {}),
    ...(whole(map['n']) ? { n: map['n'] } : {}),
    ...(typeof map['link'] === 'number' ? { link: map['link'] } : {}),
  };
}
