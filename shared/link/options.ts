/** What can be set on the server's side of the device link: each with its default and what it is for. */
export const linkOptionTable = {
  batchSamples: { default: 1000, unit: 'samples', sentence: 'The most samples in one batch.' },
  frameBytes: { default: 1_048_576, unit: 'bytes', sentence: 'The largest frame; a larger one gets FRAME_TOO_LARGE.' },
  ceilingBytes: { default: 16_777_216, unit: 'bytes', sentence: 'A frame above this is not even taken in: the socket closes with 1009 (RFC 6455).' },
  unacked: { default: 256, unit: 'batches', sentence: 'The most batches of a run that may wait for their acknowledgement.' },
  unackedWhenSlow: { default: 16, unit: 'batches', sentence: 'What pace asks for while storage is slow or down.' },
  rateMinHz: { default: 1, unit: 'Hz', sentence: 'The lowest rate that hello may say.' },
  rateMaxHz: { default: 20_000, unit: 'Hz', sentence: 'The highest rate that hello may say.' },
  channelsMax: { default: 256, unit: 'channels', sentence: 'The most channels of a device.' },
  openRuns: { default: 8, unit: 'runs', sentence: 'The most runs of one device that are begun and not ended.' },
  helloWithinMs: { default: 5_000, unit: 'ms', sentence: 'A connection that has not said hello by then is closed.' },
  pingEveryMs: { default: 5_000, unit: 'ms', sentence: 'How often a silent device is pinged.' },
  silenceMs: { default: 15_000, unit: 'ms', sentence: 'A device from which nothing, not even a pong, came for this long counts as gone.' },
  busyPingMs: { default: 1_000, unit: 'ms', sentence: 'How long the older of two connections of one device has to answer a ping before the newer one replaces it.' },
  faultsInARow: { default: 100, unit: 'faults', sentence: 'So many refused frames with nothing good between close the connection.' },
  clockBurst: { default: 8, unit: 'round trips', sentence: 'Clock round trips right after hello.' },
  clockBurstEveryMs: { default: 60, unit: 'ms', sentence: 'Time between the round trips of the burst.' },
  clockEveryMs: { default: 4_000, unit: 'ms', sentence: 'Time between clock round trips afterwards.' },
  commitEveryMs: { default: 100, unit: 'ms', sentence: 'Time between group commits while they are quick.' },
  commitShare: { default: 0.5, unit: 'fraction', sentence: 'The most of the time that commits may take: when one takes long the next one waits longer and carries more.' },
  commitEveryMostMs: { default: 400, unit: 'ms', sentence: 'The longest that a batch waits for the next commit to begin.' },
  chunkS: { default: 1, unit: 's', sentence: 'Length of a stored chunk.' },
  pendingBytes: { default: 67_108_864, unit: 'bytes', sentence: 'Samples of all devices that may wait for a commit; above it sockets are not read.' },
  pendingBytesOfRun: { default: 8_388_608, unit: 'bytes', sentence: 'Samples of one run that may wait for a commit; above it its socket is not read.' },
  retryFirstMs: { default: 100, unit: 'ms', sentence: 'Wait before a failed commit is tried again; doubled each time.' },
  retryMostMs: { default: 2_000, unit: 'ms', sentence: 'The longest wait before a failed commit is tried again.' },
  lostAfterMs: { default: 900_000, unit: 'ms', sentence: 'A run whose device stays away for this long is closed with reason lost.' },
  sweepEveryMs: { default: 15_000, unit: 'ms', sentence: 'How often the room of samples that moved into chunks is given back.' },
  queuedBytes: { default: 4_194_304, unit: 'bytes', sentence: 'Frames of one connection that may wait while an earlier one is being handled; above it its socket is not read.' },
  flagsToldEveryMs: { default: 100, unit: 'ms', sentence: 'How often flags that are still going on are told to the rooms.' },
  gapsListed: { default: 2_000, unit: 'gaps', sentence: 'The most gaps listed with a recording; further ones show in its sample times only.' },
  marksKept: { default: 5_000, unit: 'marks', sentence: 'The most marks of a run.' },
} as const;

export type LinkOptionName = keyof typeof linkOptionTable;
export type LinkOptions = { readonly [K in LinkOptionName]: number };

/** Defaults with what is given in their place. */
export function linkOptions(given: Partial<LinkOptions> = {}): LinkOptions {
  const defaults = Object.fromEntries(Object.entries(linkOptionTable).map(([name, entry]) => [name, entry.default]));
  return { ...(defaults as LinkOptions), ...given };
}
