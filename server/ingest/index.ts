/** Recording: the device link and what it stores. */
export { createDeviceLink, type DeviceLink } from './device-link';
export type { DeviceControl, DeviceState, TrialBook } from './ports';
export { deleteRecording, dropUnfinishedFiles } from './queries';
export { readChunks, readEncodedChunks, type Filing, type RecordingToFile, writeRecording } from './store';
export { readWindow, type ReadWindow } from './read-window';
export { unpackChunk } from './zlib-codec';
