import { ChangeDetectionStrategy, Component } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { MatIconTestingModule } from '@angular/material/icon/testing';
import { MatMenuHarness } from '@angular/material/menu/testing';
import { provideRouter } from '@angular/router';
import { type Column } from './column';
import { FigureFrame, FigurePoint } from './figure-frame';

interface Row {
  readonly bin: string;
  readonly rate: number;
}

@Component({
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [FigureFrame, FigurePoint],
  template: `
    <ts-figure title="Bad rate by bin" finding="Risk rises steadily." [table]="{ columns, rows }">
      <svg width="200" height="100">
        @for (row of rows; track row.bin) {
          <circle [tsPoint]="row.bin + ', ' + row.rate" tsPointSeries="development" r="3" />
        }
        @for (row of rows; track row.bin) {
          <circle [tsPoint]="row.bin + ' hold-out'" tsPointSeries="holdOut" r="3" />
        }
      </svg>
    </ts-figure>
  `,
})
class Host {
  readonly rows: readonly Row[] = [
    { bin: 'low', rate: 0.05 },
    { bin: 'high', rate: 0.3512345 },
  ];
  readonly columns: readonly Column<Row>[] = [
    { key: 'bin', label: 'Bin', value: (row) => row.bin },
    { key: 'rate', label: 'Bad rate', kind: 'share', value: (row) => row.rate },
  ];
}

describe('FigureFrame', () => {
  let fixture: ComponentFixture<Host>;
  let element: HTMLElement;

  beforeEach(async () => {
    TestBed.configureTestingModule({ imports: [MatIconTestingModule], providers: [provideRouter([])] });
    fixture = TestBed.createComponent(Host);
    element = fixture.nativeElement as HTMLElement;
    document.body.append(element);
    await fixture.whenStable();
  });

  afterEach(() => element.remove());

  const circles = (): SVGElement[] => [...element.querySelectorAll<SVGElement>('circle')];
  const focused = (): string | null | undefined => document.activeElement?.getAttribute('aria-label');
  const press = async (key: string): Promise<void> => {
    document.activeElement?.dispatchEvent(new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true }));
    await fixture.whenStable();
  };

  it('names the chart and shows its finding', () => {
    expect(element.querySelector('svg[role=group]')?.getAttribute('aria-label')).toBe('Bad rate by bin');
    expect(element.querySelector('.finding')?.textContent).toBe('Risk rises steadily.');
  });

  it('takes one stop of Tab and moves by arrow keys, along the series and across', async () => {
    expect(circles().map((circle) => circle.getAttribute('tabindex'))).toEqual(['0', '-1', '-1', '-1']);
    circles()[0].focus();
    await press('ArrowRight');
    expect(focused()).toBe('high, 0.3512345');
    await press('ArrowDown');
    expect(focused()).toBe('high hold-out');
    await press('Home');
    expect(focused()).toBe('low hold-out');
    await press('ArrowUp');
    expect(focused()).toBe('low, 0.05');
    await press('ArrowLeft');
    expect(focused()).toBe('low, 0.05');
    expect(element.querySelector('.readout')?.textContent).toContain('low, 0.05');
  });

  it('shows the same numbers as a table', async () => {
    const toggle = element.querySelector<HTMLButtonElement>('.tool[aria-pressed]');
    toggle?.click();
    await fixture.whenStable();
    expect(toggle?.getAttribute('aria-pressed')).toBe('true');
    expect(element.querySelector('svg circle')).toBeNull();
    expect([...element.querySelectorAll('tbody td')].map((cell) => cell.textContent?.trim())).toEqual([
      '5.0\u202F%',
      '35.1\u202F%',
    ]);
  });

  it('saves the numbers at full precision and the drawing with its title', async () => {
    const saved: { name: string; text: Promise<string> }[] = [];
    const blobs = new Map<string, Blob>();
    URL.createObjectURL = (blob: Blob) => {
      const url = `blob:${blobs.size}`;
      blobs.set(url, blob);
      return url;
    };
    URL.revokeObjectURL = () => undefined;
    vi.spyOn(HTMLAnchorElement.prototype, 'click').mockImplementation(function (this: HTMLAnchorElement) {
      const blob = blobs.get(this.href);
      if (blob) saved.push({ name: this.download, text: blob.text() });
    });
    const menu = await TestbedHarnessEnvironment.documentRootLoader(fixture).getHarness(MatMenuHarness);
    await menu.open();
    await menu.clickItem({ text: /CSV/ });
    await menu.open();
    await menu.clickItem({ text: /SVG/ });
    expect(saved.map((file) => file.name)).toEqual(['bad-rate-by-bin.csv', 'bad-rate-by-bin.svg']);
    expect(await saved[0].text).toBe('Bin,Bad rate\r\nlow,0.05\r\nhigh,0.3512345\r\n');
    const svg = new DOMParser().parseFromString(await saved[1].text, 'image/svg+xml');
    expect(svg.querySelector('title')?.textContent).toBe('Bad rate by bin');
    expect(svg.querySelectorAll('circle')).toHaveLength(4);
    expect(svg.querySelector('[class], [tabindex], [style]')).toBeNull();
  });
});
