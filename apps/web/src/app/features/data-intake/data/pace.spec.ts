import { Pace } from './pace';

describe('the time that is left', () => {
  it('follows from the mean rate since it began, once there is one', () => {
    let now = 5000;
    const pace = new Pace(() => now);
    expect(pace.left(10, 100)).toBeNull();
    pace.begin(0);
    now += 999;
    expect(pace.left(500, 1000)).toBeNull();
    now += 1;
    expect(pace.left(250, 1000)).toBe(3);
    now += 1000;
    expect(pace.left(1000, 1000)).toBe(0);
  });

  it('leaves out what went before a pause', () => {
    let now = 0;
    const pace = new Pace(() => now);
    pace.begin(0);
    now += 100_000;
    pace.stop();
    expect([pace.begun, pace.left(500, 1000)]).toEqual([false, null]);
    pace.begin(500);
    now += 2000;
    expect(pace.left(500, 1000)).toBeNull();
    expect(pace.left(600, 1000)).toBe(8);
  });
});
