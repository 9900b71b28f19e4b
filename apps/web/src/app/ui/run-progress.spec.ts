import { provideHttpClient } from '@angular/common/http';
import { provideHttpClientTesting } from '@angular/common/http/testing';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { provideRouter } from '@angular/router';
import type { Run } from '../core/events/runs';
import { RunProgress } from './run-progress';

const run: Run = {
  id: '11111111-1111-4111-8111-111111111111',
  kind: 'binning.reclass',
  state: 'running',
  phase: 'Reading the characteristics',
  share: 0.07,
  attempt: 1,
  modelId: null,
  entity: null,
  entityId: null,
  startedBy: 'Marian',
  createdAt: '2026-11-03T13:00:00Z',
  startedAt: '2026-11-03T13:00:01Z',
  endedAt: null,
  result: null,
  problem: null,
  abilities: ['cancel'],
};

describe('RunProgress', () => {
  let fixture: ComponentFixture<RunProgress>;
  const bar = (): Element | null => (fixture.nativeElement as HTMLElement).querySelector('[role=progressbar]');
  const shown = (): string => (fixture.nativeElement as HTMLElement).textContent?.replace(/\s+/g, ' ').trim() ?? '';
  const show = (change: Partial<Run>): void => {
    fixture.componentRef.setInput('run', { ...run, ...change });
    fixture.detectChanges();
  };

  beforeEach(() => {
    TestBed.configureTestingModule({ providers: [provideHttpClient(), provideHttpClientTesting(), provideRouter([])] });
    fixture = TestBed.createComponent(RunProgress);
    fixture.componentRef.setInput('title', 'Classing anew');
  });

  it('says what is done at the moment, and how far it is', () => {
    show({});
    expect(bar()?.getAttribute('aria-valuetext')).toBe('Reading the characteristics, 7\u202f%');
  });

  it('does not say twice what the whole run does', () => {
    show({ phase: 'Classing anew' });
    expect(bar()?.getAttribute('aria-valuetext')).toBe('7\u202f%');
    expect((fixture.nativeElement as HTMLElement).querySelector('.ts-second')?.textContent).toBe('7\u202f%');
  });

  it('says how a run ended that did not end well', () => {
    show({ state: 'cancelled', endedAt: '2026-11-03T13:00:09Z' });
    expect(bar()).toBeNull();
    expect(shown()).toBe('Classing anew was cancelled. Nothing of it was kept.');
  });
});
