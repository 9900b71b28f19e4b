/** Builds one part into dist/ unless it was built from the sources as they are; resolves to whether it was built now. */
export function ensureBuilt(
  part: 'server' | 'web',
  options?: { readonly say?: (line: string) => void; readonly force?: boolean },
): Promise<boolean>;
