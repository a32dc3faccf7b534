export * from './channels';
export * from './chunk';
export * from './csv';
export * from './digest';
export * from './nominal-rate';
export * from './pyramid';
export * from './recording-summary';
