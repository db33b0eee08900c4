const browsers: readonly (readonly [RegExp, string])[] = [
  [/Edg\//, 'Edge'],
  [/OPR\//, 'Opera'],
  [/Firefox\//, 'Firefox'],
  [/Chrom(?:e|ium)\//, 'Chrome or Chromium'],
  [/Safari\//, 'Safari'],
];
const systems: readonly (readonly [RegExp, string])[] = [
  [/Android/, 'Android'],
  [/iPhone|iPad/, 'iOS'],
  [/Windows/, 'Windows'],
  [/Mac OS X/, 'macOS'],
  [/Linux/, 'Linux'],
];

/** A browser as it named itself, in a few words; what is not known is shown as it was sent. */
export function browserInWords(agent: string): string {
  if (agent.trim() === '') return 'a browser that gave no name';
  const browser = browsers.find(([pattern]) => pattern.test(agent))?.[1];
  if (browser === undefined) return agent.slice(0, 80);
  const system = systems.find(([pattern]) => pattern.test(agent))?.[1];
  return system === undefined ? browser : `${browser} on ${system}`;
}
