import { ChangeDetectionStrategy, Component } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { provideRouter } from '@angular/router';
import { RouterTestingHarness } from '@angular/router/testing';
import type { WorkStep } from '@tallystone/contracts/models/schema';
import { WorksRule } from './works-rule';

const step = (name: WorkStep['step'], state: WorkStep['state'], caption: string): WorkStep => ({
  step: name,
  state,
  caption,
  path: `/models/1/${name}`,
});

@Component({
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [WorksRule],
  template: `<ts-works-rule [steps]="steps" />`,
})
class Host {
  readonly steps = [
    step('sample', 'done', '24 000 rows'),
    step('binning', 'decision', 'one cut unexplained'),
    step('fit', 'ahead', 'not begun'),
  ];
}

describe('WorksRule', () => {
  it('is a list of links that says how far the work has come and where one is', async () => {
    TestBed.configureTestingModule({ providers: [provideRouter([{ path: '**', component: Host }])] });
    const harness = await RouterTestingHarness.create('/models/1/binning/card-utilisation?tab=table');
    const element = harness.routeNativeElement as HTMLElement;
    const links = [...element.querySelectorAll('nav[aria-label] ol > li > a')];
    expect(links.map((link) => link.getAttribute('href'))).toEqual(['/models/1/sample', '/models/1/binning', '/models/1/fit']);
    expect(links.map((link) => link.getAttribute('aria-current'))).toEqual([null, 'step', null]);
    expect(links.map((link) => link.textContent?.replace(/\s+/g, ' ').trim())).toEqual([
      'Sample24 000 rows, done',
      'Binningone cut unexplained, waits for a decision',
      'Fitnot begun, not reached',
    ]);
    expect([...element.querySelectorAll('li')].map((item) => item.classList.contains('come'))).toEqual([true, true, false]);
  });
});
