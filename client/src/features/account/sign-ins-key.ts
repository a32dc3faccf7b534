/** Key under which the list of one's sign-ins is remembered. */
export const signInsKey = ['sign-ins'] as const;
