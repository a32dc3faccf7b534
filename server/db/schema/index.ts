export * from './people';
export * from './rigs';
export * from './studies';
export * from './sessions';
export * from './recordings';
export * from './flags';
export * from './notes';
export * from './lab';
