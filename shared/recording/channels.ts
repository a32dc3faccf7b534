/**
 * Channels of a recording: their names, their order, and what each of them is.
 *
 * Time is not a channel: it travels beside the data (`Chunk.timesUs`). A recording of n cables has 8 + 2n channels of
 * float32, so 24 channels and 96 bytes a sample for eight cables, and after them any further channels `name_unit`.
 */

/** One named quantity with its unit, as in the header of a recording file: `x_m`, `t3_N`, `fx_N`. */
export type ChannelName = string;

export const poseChannels: readonly ChannelName[] = ['x_m', 'y_m', 'z_m', 'qx', 'qy', 'qz', 'qw'];
export const graspChannel: ChannelName = 'grasp';

export const tensionChannel = (cable: number): ChannelName => `t${cable}_N`;
export const lengthChannel = (cable: number): ChannelName => `l${cable}_m`;

/** Where each quantity stands among the channels; indices into the channel list. */
export type ChannelMap = {
  readonly names: readonly ChannelName[];
  readonly cableCount: number;
  /** x y z qx qy qz qw */
  readonly pose: readonly number[];
  readonly grasp: number;
  /** Cable 1 first. */
  readonly tensions: readonly number[];
  readonly lengths: readonly number[];
  /** Further channels, in the order of the file. */
  readonly extras: readonly { readonly name: ChannelName; readonly index: number }[];
};

export type ChannelFault = {
  readonly code: 'CHANNELS';
  readonly message: string;
  readonly missing: readonly ChannelName[];
  readonly doubled: readonly ChannelName[];
  readonly unreadable: readonly ChannelName[];
};

export type ChannelResult = { readonly ok: true; readonly map: ChannelMap } | { readonly ok: false; readonly error: ChannelFault };

/** The channels of a rig with n cables in the order of a recording file, without the time column. */
export function channelNames(cableCount: number, extras: readonly ChannelName[] = []): ChannelName[] {
  const cables = Array.from({ length: cableCount }, (_, i) => i + 1);
  return [...poseChannels, graspChannel, ...cables.map(tensionChannel), ...cables.map(lengthChannel), ...extras];
}

/**
 * Finds every quantity of a rig among the channels that a device or a file announces. Order is free.
 *
 * @returns the map, or what is missing, named twice, or not of the form `name_unit`
 */
export function parseChannels(names: readonly ChannelName[], cableCount: number): ChannelResult {
  const indexOf = new Map<ChannelName, number>();
  const doubled: ChannelName[] = [];
  names.forEach((name, index) => (indexOf.has(name) ? doubled.push(name) : indexOf.set(name, index)));
  const required = channelNames(cableCount);
  const missing = required.filter((name) => !indexOf.has(name));
  const requiredSet = new Set(required);
  const extras = names.map((name, index) => ({ name, index })).filter(({ name }) => !requiredSet.has(name));
  const unreadable = extras.map(({ name }) => name).filter((name) => !isExtraName(name));
  if (missing.length > 0 || doubled.length > 0 || unreadable.length > 0) {
    return { ok: false, error: { code: 'CHANNELS', message: sentence(missing, doubled, unreadable, cableCount), missing, doubled, unreadable } };
  }
  const at = (name: ChannelName): number => {
    const index = indexOf.get(name);
    if (index === undefined) throw new Error(`channel ${name} was checked and is gone`);
    return index;
  };
  const cables = Array.from({ length: cableCount }, (_, i) => i + 1);
  return {
    ok: true,
    map: {
      names: [...names],
      cableCount,
      pose: poseChannels.map(at),
      grasp: at(graspChannel),
      tensions: cables.map((cable) => at(tensionChannel(cable))),
      lengths: cables.map((cable) => at(lengthChannel(cable))),
      extras,
    },
  };
}

/** A further channel is `name_unit` and none of the cable channels of another rig. */
function isExtraName(name: ChannelName): boolean {
  return /^[A-Za-z][A-Za-z0-9]*(_[A-Za-z0-9%/^-]+)+$/.test(name) && !/^(t\d+_N|l\d+_m|t_s)$/.test(name);
}

const ordinals = ['zeroth', 'first', 'second', 'third', 'fourth', 'fifth', 'sixth', 'seventh', 'eighth', 'ninth', 'tenth', 'eleventh', 'twelfth'];

function spoken(name: ChannelName): string {
  const cable = /^([tl])(\d+)_[Nm]$/.exec(name);
  if (!cable) return name === graspChannel ? 'the grasp' : `the pose channel ${name}`;
  const number = Number(cable[2]);
  return `the ${ordinals[number] ?? `${number}th`} ${cable[1] === 't' ? 'tension' : 'length'} (${name})`;
}

function sentence(missing: ChannelName[], doubled: ChannelName[], unreadable: ChannelName[], cableCount: number): string {
  const parts: string[] = [];
  if (missing.length > 0) {
    const shown = missing.slice(0, 3).map(spoken).join(', ');
    parts.push(`missing: ${shown}${missing.length > 3 ? ` and ${missing.length - 3} more` : ''}`);
  }
  if (doubled.length > 0) parts.push(`named twice: ${doubled.join(', ')}`);
  if (unreadable.length > 0) parts.push(`not of this rig, nor a further channel of the form name_unit: ${unreadable.join(', ')}`);
  return `The channels do not fit a rig with ${cableCount} cables; ${parts.join('; ')}.`;
}
