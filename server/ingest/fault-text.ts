/** What to log of an error: database errors print their parameters, samples and all, so only the cause's message is kept. */
export function faultText(error: unknown): string {
  if (!(error instanceof Error)) return 'unknown';
  return (error.cause instanceof Error ? error.cause.message : error.message).slice(0, 300);
}
