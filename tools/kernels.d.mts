/** The text of libs/numeric/engine/kernels/bytes.ts, compiled anew from the kernels' source. */
export function kernelModule(): Promise<string>;
