/** The simulated rig: runs in virtual time, and devices that stream them over the real link. */
export { simulateRun, wrenchChannels, type Mark, type RunOptions, type SimulatedRun } from './simulate-run';
export { noNoise, usualNoise, type Noise } from './readings';
export { tasks, taskCodes, findTask } from './tasks';
export { parseTrouble, troubleKinds, type Trouble, type TroubleKind, type TroubleWish } from './trouble';
export type { Truth } from './truth';
export type { Move } from './motion';
export { createSimulatedDevice, type DeviceEvent, type DeviceReport, type SimulatedDevice, type SimulatedDeviceOptions } from './device/simulated-device';
export { LinkRefusal, type LinkRefusalCode } from './device/link-refusal';
export type { RunReport } from './device/run-ledger';
export type { RunSource } from './device/live-run';
export type { Upsets } from './device/upsets';
