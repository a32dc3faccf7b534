export * from './channels';
export * from './chunk';
export * from './csv';
