export * from './channels';
export * from './chunk';
