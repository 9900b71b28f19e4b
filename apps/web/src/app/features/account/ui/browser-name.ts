const browsers: readonly (readonly [RegExp, string])[] = [
  [/Edg(e|A|iOS)?\//, 'Edge'],
  [/OPR\/|Opera/, 'Opera'],
  [/Firefox\/|FxiOS\//, 'Firefox'],
  [/Chrom(e|ium)\/|CriOS\/|HeadlessChrome\//, 'Chrome'],
  [/Safari\//, 'Safari'],
];

const systems: readonly (readonly [RegExp, string])[] = [
  [/iPhone|iPad/, 'iOS'],
  [/Android/, 'Android'],
  [/Windows/, 'Windows'],
  [/Mac OS X|Macintosh/, 'macOS'],
  [/CrOS/, 'ChromeOS'],
  [/Linux|X11/, 'Linux'],
];

/** What a browser says of itself (User-Agent), in words: "Firefox on Windows". What is not recognised is shown as it came. */
export function browserName(agent: string | null): string {
  if (!agent) return 'Unknown browser';
  // The order matters: Edge and Opera also say Chrome, Chrome also says Safari.
  const browser = browsers.find(([pattern]) => pattern.test(agent))?.[1];
  const system = systems.find(([pattern]) => pattern.test(agent))?.[1];
  if (!browser) return agent.slice(0, 80);
  return system ? `${browser} on ${system}` : browser;
}
