/** Before this a rate says more of how the connection opened than of how fast it is. */
const leastMs = 1000;

/**
 * How long something takes that is counted in bytes, from its mean rate since it began or went on.
 *
 * @example pace.begin(0); pace.left(250, 1000) // 3 after one second
 */
export class Pace {
  private from: { readonly bytes: number; readonly at: number } | null = null;

  constructor(private readonly clock: () => number = () => performance.now()) {}

  get begun(): boolean {
    return this.from !== null;
  }

  begin(bytes: number): void {
    this.from = { bytes, at: this.clock() };
  }

  stop(): void {
    this.from = null;
  }

  /** Seconds until `whole`; null while nobody can tell. */
  left(bytes: number, whole: number): number | null {
    if (!this.from) return null;
    const ms = this.clock() - this.from.at;
    const done = bytes - this.from.bytes;
    return ms < leastMs || done <= 0 ? null : ((whole - bytes) * ms) / done / 1000;
  }
}
