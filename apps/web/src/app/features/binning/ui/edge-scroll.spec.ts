import { EdgeScroll, edgeSpeed, frameOf } from './edge-scroll';

const bounds = { left: 100, right: 900 };

describe('scrolling at the edges of a frame', () => {
  it('is the faster the nearer to an edge, and none between', () => {
    for (const x of [156, 500, 844]) expect(edgeSpeed(x, bounds)).toBe(0);
    const [far, near, edge, beyond] = [150, 110, 100, 20].map((x) => edgeSpeed(x, bounds));
    expect(far).toBeLessThan(-120);
    expect(near).toBeLessThan(far);
    expect(edge).toBe(-1200);
    expect(beyond).toBe(edge);
    expect([edgeSpeed(890, bounds), edgeSpeed(980, bounds)]).toEqual([-near, 1200]);
    // Of a narrow frame half stays still.
    expect(edgeSpeed(130, { left: 100, right: 200 })).toBe(0);
  });

  describe('of what is wider than its frame', () => {
    let frame: HTMLElement;
    let steps: ((now: number) => void)[];
    let time: number;
    beforeEach(() => {
      frame = document.createElement('div');
      frame.style.overflowX = 'auto';
      frame.append(document.createElement('p'));
      let left = 500;
      Object.defineProperties(frame, {
        scrollWidth: { value: 2000 },
        clientWidth: { value: 800 },
        // As a browser keeps it, between none and all.
        scrollLeft: { get: () => left, set: (value: number) => (left = Math.min(1200, Math.max(0, value))) },
      });
      frame.getBoundingClientRect = () => bounds as DOMRect;
      document.body.append(frame);
      steps = [];
      time = 0;
      vi.stubGlobal('requestAnimationFrame', (step: (now: number) => void) => steps.push(step));
      vi.stubGlobal('cancelAnimationFrame', () => (steps = []));
      vi.spyOn(performance, 'now').mockImplementation(() => time);
    });
    afterEach(() => {
      frame.remove();
      vi.unstubAllGlobals();
      vi.restoreAllMocks();
    });
    /** Frames of the screen, 20 ms apart, as long as any is asked for. */
    const frames = (most: number): number => {
      let made = 0;
      for (; made < most && steps.length > 0; made++) {
        time += 20;
        steps.shift()!(time);
      }
      return made;
    };

    it('goes on while the pointer stays, tells each step, and ends at the end', () => {
      expect(frameOf(frame.firstElementChild!)).toBe(frame);
      let told = 0;
      const scroll = new EdgeScroll(() => told++);
      scroll.follow(frame, 60);
      expect(frames(5)).toBe(5);
      expect([frame.scrollLeft, told]).toEqual([500 - 5 * 24, 5]);
      // Nearer to the middle it stands.
      scroll.follow(frame, 500);
      expect(frames(10)).toBe(1);
      expect(frame.scrollLeft).toBe(380);
      scroll.follow(frame, 60);
      expect(frames(100)).toBeLessThan(20);
      expect(frame.scrollLeft).toBe(0);
      scroll.follow(frame, 940);
      frames(3);
      expect(frame.scrollLeft).toBe(72);
      scroll.stop();
      expect(frames(3)).toBe(0);
    });

    it('is of no frame that shows all', () => {
      Object.defineProperty(frame.firstElementChild, 'parentElement', { value: document.body });
      expect(frameOf(frame.firstElementChild!)).toBeNull();
    });
  });
});
