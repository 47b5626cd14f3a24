import { readFileSync } from 'node:fs';
import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import { describe, expect, it, onTestFinished } from 'vitest';
import { hasChromium, openBrowser } from '../support/browser.ts';
import { listenOnAnyPort, testApp } from '../support/server-app.ts';
import { dimmerEntry, lampEntry, send } from '../support/server-entries.ts';
import { CANNED_JUDGEMENT, fakeSimulation } from '../support/server-fake-simulation.ts';

/** The snippet as README.md gives it. */
function snippet(): string {
  const readme = readFileSync(new URL('../../README.md', import.meta.url), 'utf8');
  const found = /```html\n(<a [\s\S]*?)```/.exec(readme)?.[1];
  if (found === undefined) throw new Error('README.md has no snippet for a badge.');
  return found;
}

/** A page of another origin that shows the badge by the README's snippet, between two paragraphs. */
async function pageWithBadge() {
  const conditions = [{ kind: 'lowest-dial', position: 25, detail: 'For a test.' }] as const;
  const simulation = fakeSimulation(async () => ({ ok: true, value: { ...CANNED_JUDGEMENT, grade: 'conditional', conditions } }));
  const app = await testApp({ simulation });
  await send(app, 'PUT', '/v1/dimmers/landing-old', dimmerEntry());
  await send(app, 'PUT', '/v1/lamps/candle-8', lampEntry());
  const mains = { voltage_V: 230, frequency_Hz: 50 };
  await app.post({ mains, dimmer: { dimmerId: 'landing-old' }, lamps: [{ lampId: 'candle-8', count: 4 }] });
  const service = `http://127.0.0.1:${await listenOnAnyPort(app.app)}`;

  const embedded = snippet().replaceAll('http://127.0.0.1:8080', service);
  const html = `<!doctype html><html lang="en"><meta charset="utf-8"><meta name="color-scheme" content="light dark"><title>Shop</title>
    <link rel="icon" href="data:,"><p>Before.</p>${embedded}<p id="after">After.</p></html>`;
  const shop = createServer((_request, response) => response.setHeader('content-type', 'text/html').end(html));
  await new Promise<void>((resolve) => shop.listen(0, '127.0.0.1', resolve));
  onTestFinished(() => void shop.close());

  const browser = await openBrowser();
  onTestFinished(() => browser.close());
  return { browser, service, address: `http://127.0.0.1:${(shop.address() as AddressInfo).port}/` };
}

// Needs chromium (apt-get install chromium) at /usr/bin/chromium.
describe.skipIf(!hasChromium)("the README's snippet in a page of somebody else, in chromium", () => {
  it('shows the badge at its size, named for a screen reader, without a complaint of the browser', async () => {
    const { browser, address } = await pageWithBadge();
    const page = await browser.newPage();
    const complaints: string[] = [];
    page.on('console', (message) => void complaints.push(message.text()));
    page.on('requestfailed', (request) => void complaints.push(`${request.url()} ${request.failure()?.errorText}`));
    await page.goto(address, { waitUntil: 'load' });
    const image = page.locator('img');
    expect(await image.evaluate((img: unknown) => [(img as Sized).naturalWidth, (img as Sized).naturalHeight])).toEqual([264, 60]);
    expect(await image.boundingBox()).toMatchObject({ width: 264, height: 60 });
    expect(await image.getAttribute('alt')).toMatch(/\w/);
    expect(complaints).toEqual([]);
  });

  it('does not move what stands below when the badge arrives, however late', async () => {
    const { browser, address } = await pageWithBadge();
    const page = await browser.newPage();
    let release: () => void = () => undefined;
    const held = new Promise<void>((resolve) => {
      release = resolve;
    });
    await page.route('**/v1/badges/**', async (route) => {
      await held;
      await route.continue();
    });
    await page.goto(address, { waitUntil: 'commit' });
    const below = page.locator('#after');
    await below.waitFor();
    const before = await below.boundingBox();
    release();
    await page.waitForFunction('document.querySelector("img").complete');
    expect(await below.boundingBox()).toEqual(before);
  });

  it('is light or dark as the reader prefers, and its text stays inside in either', async () => {
    const { browser, service } = await pageWithBadge();
    const grounds: unknown[] = [];
    for (const colorScheme of ['light', 'dark'] as const) {
      const page = await browser.newPage({ colorScheme });
      await page.goto(`${service}/v1/badges/landing-old/candle-8.svg?count=4`);
      const { ground, right, bottom, texts } = await page.evaluate<Drawn>(DRAWN);
      expect(texts).toEqual(['Conditional', '4 lamps', 'dial from 25 % up']);
      expect(right).toBeLessThanOrEqual(264 - 8);
      expect(bottom).toBeLessThanOrEqual(60 - 2);
      grounds.push(ground);
    }
    expect(grounds).toEqual(['rgb(251, 250, 247)', 'rgb(29, 31, 34)']);
  });

  it('lets a script of that page read the JSON', async () => {
    const { browser, address, service } = await pageWithBadge();
    const page = await browser.newPage();
    await page.goto(address);
    const url = `${service}/v1/badges/landing-old/candle-8.json?count=4`;
    const sentence = await page.evaluate(`fetch(${JSON.stringify(url)}).then((answer) => answer.json()).then(({ sentence }) => sentence)`);
    expect(sentence).toBe('Conditional: 4 lamps, from 25 % of the dial up.');
  });
});

interface Sized {
  readonly naturalWidth: number;
  readonly naturalHeight: number;
}

interface Drawn {
  readonly ground: string;
  readonly right: number;
  readonly bottom: number;
  readonly texts: readonly string[];
}

/** Runs in the page, on the picture itself. */
const DRAWN = `(() => {
  const boxes = [...document.querySelectorAll('text')].map((text) => text.getBBox());
  return {
    ground: getComputedStyle(document.querySelector('rect')).fill,
    right: Math.max(...boxes.map(({ x, width }) => x + width)),
    bottom: Math.max(...boxes.map(({ y, height }) => y + height)),
    texts: [...document.querySelectorAll('text')].map(({ textContent }) => textContent),
  };
})()`;
