const BROWSERS: readonly [RegExp, string][] = [[/Edg\//, 'Edge'], [/Firefox\//, 'Firefox'], [/Chrome\//, 'Chrome'], [/Safari\//, 'Safari']];
const SYSTEMS: readonly [RegExp, string][] = [[/Windows/, 'Windows'], [/iPhone|iPad/, 'iOS'], [/Android/, 'Android'], [/Mac OS X|Macintosh/, 'macOS'], [/Linux|X11/, 'Linux']];

/** A user agent in two words, as far as it says; order matters, because each names the ones before it. */
export function browserWords(userAgent: string): string {
  const browser = BROWSERS.find(([pattern]) => pattern.test(userAgent))?.[1];
  const system = SYSTEMS.find(([pattern]) => pattern.test(userAgent))?.[1];
  if (browser === undefined) return userAgent === '' ? 'an unknown browser' : userAgent.slice(0, 40);
  return system === undefined ? browser : `${browser} on ${system}`;
}
