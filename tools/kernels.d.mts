/** The text of libs/numeric/engine/kernels/bytes.ts, compiled anew from the kernels' source. */
export function kernelModule(): Promise<string>;

/** The text of server/src/profiling/sha256/bytes.ts, compiled anew. */
export function hashModule(): Promise<string>;
