import { EventParser } from './event-parser';

describe('EventParser', () => {
  const text = ': heartbeat\n\nid: 7\nevent: run\ndata: {"a":1,\ndata: "b":2}\n\nid: 8\ndata: plain\n\n';

  it('gives the same messages however the text is cut', () => {
    const whole = new EventParser().push(text);
    expect(whole).toEqual([
      { id: '7', event: 'run', data: '{"a":1,\n"b":2}', retryMs: null },
      { id: '8', event: 'message', data: 'plain', retryMs: null },
    ]);
    for (let size = 1; size < 12; size += 1) {
      const parser = new EventParser();
      const pieces = [];
      for (let i = 0; i < text.length; i += size) pieces.push(...parser.push(text.slice(i, i + size)));
      expect(pieces).toEqual(whole);
    }
  });

  it('takes CRLF, even cut between CR and LF', () => {
    const parser = new EventParser();
    expect([...parser.push('data: one\r'), ...parser.push('\n\r'), ...parser.push('\n')]).toEqual([
      { id: null, event: 'message', data: 'one', retryMs: null },
    ]);
  });

  it('keeps the last id for messages without one', () => {
    const parser = new EventParser();
    parser.push('id: 3\ndata: x\n\n');
    expect(parser.push('data: y\n\n')[0].id).toBe('3');
  });
});
