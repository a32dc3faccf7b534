/** Joins class names; false and undefined ones fall out. */
export const classNames = (...names: readonly (string | false | null | undefined)[]): string => names.filter(Boolean).join(' ');
