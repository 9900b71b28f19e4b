/** A pointer this near to an edge of the frame scrolls it. */
const reach = 56; // px
const slowest = 120; // px per second
const fastest = 1200; // px per second

/** How fast a frame scrolls under a pointer, in pixels per second: to the left negative, the faster the nearer to its edge, and fastest beyond. */
export function edgeSpeed(x: number, { left, right }: { readonly left: number; readonly right: number }): number {
  const zone = Math.min(reach, (right - left) / 4);
  const inside = Math.min(x - left, right - x);
  if (inside >= zone) return 0;
  const speed = slowest + (fastest - slowest) * Math.min(1, 1 - inside / zone);
  return x - left < right - x ? -speed : speed;
}

/**
 * Scrolls a frame while something is dragged near its left or right edge, as long as the pointer stays there, so that every part of what is in it can be
 * reached.
 */
export class EdgeScroll {
  private frame: HTMLElement | null = null;
  private x = 0;
  private at = 0;
  private request: number | null = null;

  /** @param scrolled told after each step: what lies under the pointer is another part now */
  constructor(private readonly scrolled: () => void) {}

  /** The pointer is here. */
  follow(frame: HTMLElement, x: number): void {
    this.frame = frame;
    this.x = x;
    if (this.request !== null || edgeSpeed(x, frame.getBoundingClientRect()) === 0) return;
    this.at = performance.now();
    this.request = requestAnimationFrame(this.step);
  }

  stop(): void {
    if (this.request !== null) cancelAnimationFrame(this.request);
    this.request = null;
    this.frame = null;
  }

  private readonly step = (): void => {
    this.request = null;
    const { frame } = this;
    if (!frame) return;
    const now = performance.now();
    // A frame that was long in coming is no leap.
    const seconds = Math.min(50, now - this.at) / 1000;
    const speed = edgeSpeed(this.x, frame.getBoundingClientRect());
    if (speed === 0) return;
    // Whole pixels: a browser may drop the rest.
    const pixels = Math.sign(speed) * Math.max(1, Math.round(Math.abs(speed) * seconds));
    const before = frame.scrollLeft;
    frame.scrollLeft = before + pixels;
    if (frame.scrollLeft === before) return;
    this.at = now;
    this.scrolled();
    this.request = requestAnimationFrame(this.step);
  };
}

/** The element that a drawing scrolls in, where it is wider than that; null where all of it is in sight. */
export function frameOf(drawing: Element): HTMLElement | null {
  for (let element = drawing.parentElement; element; element = element.parentElement) {
    if (element.scrollWidth <= element.clientWidth) continue;
    if (/auto|scroll/.test(getComputedStyle(element).overflowX)) return element;
  }
  return null;
}
