import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { UploadPanel, type UploadView } from './upload-panel';

describe('a file on its way', () => {
  let fixture: ComponentFixture<UploadPanel>;
  const mebi = 1024 * 1024;
  const show = (change: Partial<UploadView>): { words: string; bar: HTMLElement | null } => {
    const view: UploadView = {
      fileName: 'a.csv',
      size: 400 * mebi,
      sent: 100 * mebi,
      compared: 0,
      secondsLeft: null,
      state: 'sending',
      ...change,
    };
    fixture.componentRef.setInput('sending', view);
    fixture.detectChanges();
    const page = fixture.nativeElement as HTMLElement;
    return {
      words: page.querySelector('.ts-second')?.textContent?.replace(/\s/g, ' ') ?? '',
      bar: page.querySelector('[role=progressbar]'),
    };
  };

  beforeEach(() => {
    fixture = TestBed.createComponent(UploadPanel);
  });

  it('says how long it takes, once that can be told', () => {
    expect(show({}).words).not.toContain('left');
    expect(show({ secondsLeft: 75 }).words).toContain('(25 %), about 1 min 15 s left');
    expect(show({ secondsLeft: 1 }).words).not.toContain('left');
    expect(show({ secondsLeft: 75, state: 'stopped' }).words).not.toContain('left');
  });

  it('says how far it is compared with what arrived earlier', () => {
    const { words, bar } = show({ state: 'comparing', compared: 50 * mebi, secondsLeft: 12 });
    expect(words).toMatch(/, 52(\.4)? MB so far/);
    expect(words).toContain('about 12 s left');
    expect([bar?.getAttribute('aria-label'), bar?.getAttribute('aria-valuenow')]).toEqual(['Compared', '50']);
  });
});
