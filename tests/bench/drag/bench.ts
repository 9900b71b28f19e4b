/**
 * Times the work on each movement while a cut is dragged: from when the page is told of it to the end of the frame that shows the counts, the weights of
 * evidence and the figures anew. On an installation of its own with the demo, in Chromium without a screen.
 *
 *   npm run bench:drag             in words
 *   npm run bench:drag -- --json   one JSON object on standard output
 */
import { type Browser, type Page, chromium } from '@playwright/test';
import config from '../../../playwright.config';
import { signIn } from '../../support/browser';
import { readDemoPlaces } from '../../support/demo-places';
import { type Installation, install } from '../../support/installation';
import { narrow, wide } from '../../support/page-inspection';

const json = process.argv.includes('--json');
const column = 'oldest_line_months';
const moves = 300;
/** A screen that is drawn 60 times a second. */
const frame = 1000 / 60;

interface Waited {
  readonly width: number;
  readonly moves: number;
  /** Movements after which a number of the table had changed. */
  readonly changed: number;
  /** Milliseconds that the main thread works on a movement and the frame that shows it. */
  readonly p50: number;
  readonly p95: number;
  readonly most: number;
  /** Share of the movements that were shown within one frame. */
  readonly withinFrame: number;
}

/** Runs in the page: after each movement of the pointer the time until the frame after it is laid out and painted, as far as the main thread does that. */
const watch = `
  window.waited = [];
  addEventListener('pointermove', () => {
    // Handed over just before a frame: what was waited for until then is the screen's, not the page's.
    const began = performance.now();
    requestAnimationFrame(() => {
      const { port1, port2 } = new MessageChannel();
      port1.onmessage = () => {
        const time = performance.now() - began;
        const text = [...document.querySelectorAll('table')].find((table) => /^Bins,\\s+Development$/.test(table.caption?.textContent.trim() ?? table.getAttribute('aria-label') ?? ''))?.innerText ?? '';
        window.waited.push({ time, text });
      };
      port2.postMessage(null);
    });
  }, true);
`;

async function drag(browser: Browser, { url, signIns }: Installation, size: typeof wide): Promise<Waited> {
  const page = await browser.newPage({ baseURL: url, viewport: size, locale: 'en-GB' });
  await signIn(page, signIns, 'modeller');
  const demo = await readDemoPlaces(page);
  await page.goto(`/models/${demo.modelId}/binning/${demo.binningId}/${demo.characteristics[column]}?axis=rows`);
  const cut = page.getByRole('slider', { name: /^Cut 3 of/ });
  await cut.scrollIntoViewIfNeeded();
  const box = (await cut.locator('.vee').boundingBox())!;
  const [x, y] = [box.x + box.width / 2, box.y + 4];
  await page.mouse.move(x, y);
  await page.mouse.down();
  // The first movements compile what the later ones run.
  await sway(page, x, y, 30);
  await page.evaluate(watch);
  await sway(page, x, y, moves);
  const waited = await page.evaluate<{ time: number; text: string }[]>('window.waited');
  await page.keyboard.press('Escape');
  await page.mouse.up();
  await page.close();
  const times = waited.map(({ time }) => time).sort((a, b) => a - b);
  const at = (share: number): number => times[Math.min(times.length - 1, Math.floor(share * times.length))];
  const changed = waited.filter(({ text }, k) => k > 0 && text !== waited[k - 1].text).length;
  if (times.length < moves / 2 || changed < moves / 10)
    throw new Error(`Of ${moves} movements the page saw ${times.length}, and the table changed after ${changed}`);
  return {
    width: size.width,
    moves: times.length,
    changed,
    p50: at(0.5),
    p95: at(0.95),
    most: times.at(-1)!,
    withinFrame: times.filter((time) => time <= frame).length / times.length,
  };
}

/** To and fro over a tenth of the axis. */
async function sway(page: Page, x: number, y: number, times: number): Promise<void> {
  for (let k = 1; k <= times; k++) await page.mouse.move(x + 40 * Math.sin(k / 6), y);
}

const installation = await install({ demo: true });
const browser = await chromium.launch(config.use?.launchOptions);
try {
  const found: Waited[] = [];
  for (const size of [wide, narrow]) found.push(await drag(browser, installation, size));
  if (json) console.log(JSON.stringify(found));
  else
    for (const { width, moves: made, changed, p50, p95, most, withinFrame } of found)
      console.log(
        `${width} px: ${made} movements, ${changed} changed the table; p50 ${p50.toFixed(1)} ms, p95 ${p95.toFixed(1)} ms, longest ${most.toFixed(1)} ms, ` +
          `${(100 * withinFrame).toFixed(0)} % within a frame of ${frame.toFixed(1)} ms`,
      );
} finally {
  await browser.close();
  await installation.stop();
}
