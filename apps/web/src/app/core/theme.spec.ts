import { TestBed } from '@angular/core/testing';
import { Theme } from './theme';

describe('Theme', () => {
  beforeEach(() => localStorage.clear());

  it('is the system’s until chosen, and the choice stays', () => {
    const theme = TestBed.inject(Theme);
    TestBed.tick();
    expect(document.documentElement.hasAttribute('data-theme')).toBe(false);
    theme.choose('dark');
    TestBed.tick();
    expect(document.documentElement.getAttribute('data-theme')).toBe('dark');
    TestBed.resetTestingModule();
    expect(TestBed.inject(Theme).choice()).toBe('dark');
  });

  it('takes no unknown word from storage', () => {
    localStorage.setItem('tallystone.theme', 'sepia');
    expect(TestBed.inject(Theme).choice()).toBe('system');
  });
});
