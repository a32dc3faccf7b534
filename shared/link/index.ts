/** The device link: messages, frames, faults, options and the clock, as both ends use them. */
export * from './messages';
export * from './faults';
export * from './options';
export * from './frames';
export * from './pack';
export * from './samples-block';
export * from './clock-filter';
export * from './device-outbox';
