import { csv, neutralised } from './csv';

describe('csv', () => {
  it('quotes as RFC 4180 asks and keeps numbers at full precision', () => {
    expect(
      csv(
        ['bin', 'WOE'],
        [
          ['a "b", c', 1.113452612345679],
          [null, Number.NaN],
          ['two\nlines', -0.5],
        ],
      ),
    ).toBe('bin,WOE\r\n"a ""b"", c",1.113452612345679\r\n,\r\n"two\nlines",-0.5\r\n');
  });

  it.each(['=1+1', '+1', '-1', '@x', '\tx', '\rx', ' =1+1', '\u00a0@x'])('neutralises the text %j', (text) => {
    expect(neutralised(text)).toBe(`'${text}`);
  });

  it('leaves other text and negative numbers alone', () => {
    expect(neutralised('a=b')).toBe('a=b');
    expect(csv(['x'], [[-1]])).toBe('x\r\n-1\r\n');
  });
});
