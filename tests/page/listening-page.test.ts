import { existsSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import type { Browser, BrowserContext, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { guessProbability } from '../../src/engine/measure/blind-test.ts';
import { readWav } from '../../src/results/wav-read.ts';
import { browserProgram, HOW_TO_GET_ONE, launch, MUST_RUN } from './browser.ts';
import { type BuiltCommand, buildCommand, noisyClip } from './built-page.ts';
import { placeOf, RECORDER, recorded } from './recorder.ts';

const program = browserProgram();
if (program === null) {
  it('the page tests have a browser', () => {
    process.stderr.write(`\n${HOW_TO_GET_ONE}\n\n`);
    expect(MUST_RUN, HOW_TO_GET_ONE).toBe(false);
  });
} else describeInBrowser(program);

/** Volume that the page begins with, as an amplitude. */
const VOLUME = 10 ** (-12 / 20);
const RATE = 48_000;

const LIST = `name: Bench trial
tuned circuit: { loaded Q: 40 }
plate: { bypass: 1n }
variants:
  as found: { plate.bypass: 2n2 }
  restored: {}
  brighter: { plate.bypass: 100p }
  changed: { plate.bypass: 820p }
`;

interface Opened {
  readonly page: Page;
  readonly context: BrowserContext;
  /** Every request to anywhere, console message and error since the page was opened. */
  readonly seen: string[];
}

function describeInBrowser(path: string): void {
  describe('the listening page', () => {
    let browser: Browser;
    let command: BuiltCommand;
    const opened: Opened[] = [];
    const at = (name: string): string => join(command.folder, name);
    const sound = (folder: string, name: string): Float64Array =>
      readWav(readFileSync(join(at(folder), `${name}.wav`)), name).channels[0]!;

    async function open(file: string, options: { width?: number; scheme?: 'light' | 'dark' } = {}): Promise<Opened> {
      const context = await browser.newContext({
        viewport: { width: options.width ?? 1280, height: 900 },
        colorScheme: options.scheme ?? 'light',
        acceptDownloads: true,
      });
      await context.addInitScript(RECORDER);
      const page = await context.newPage();
      const seen: string[] = [];
      const address = pathToFileURL(file).href;
      page.on('request', (request) => {
        // the page's own text, and what it starts from its own text
        if (request.url() !== address && !/^(blob:|data:)/.test(request.url())) seen.push(request.url());
      });
      page.on('console', (message) => seen.push(`${message.type()}: ${message.text()}`));
      page.on('pageerror', (error) => seen.push(error.message));
      await page.goto(address);
      await page.waitForSelector('html[data-ready=yes]');
      const made = { page, context, seen };
      opened.push(made);
      return made;
    }

    /** Waits for an expression of the page; asked from outside, since the page lets no text be run as script. */
    async function until(page: Page, expression: string): Promise<void> {
      for (let turn = 0; turn < 400; turn++) {
        if (await page.evaluate(expression)) return;
        await page.waitForTimeout(25);
      }
      throw new Error(`never: ${expression}`);
    }

    const wholeHeard = (page: Page): Promise<void> =>
      until(page, "!document.querySelector('#heard-now').textContent.includes('rendering')");

    /** Presses play and waits until something is heard: the audio thread may take its time to start. */
    async function play(page: Page): Promise<void> {
      await page.click('#play');
      await until(page, "parseFloat(document.querySelector('#clock').textContent) > 0");
    }

    async function saved(page: Page, control: string): Promise<Buffer> {
      const [download] = await Promise.all([page.waitForEvent('download'), page.click(control)]);
      return readFileSync(await download.path());
    }

    beforeAll(async () => {
      command = buildCommand();
      noisyClip(at('clip.wav'), 4);
      writeFileSync(at('list.yaml'), LIST);
      command.run('render', 'clip.wav', 'list.yaml', '--out', 'all', '--quiet');
      browser = await launch(path);
    });
    afterAll(async () => {
      await browser?.close();
      rmSync(command.folder, { recursive: true, force: true });
    });

    it('opens from disk with no request and no word on the console', async () => {
      expect(existsSync(join(at('all'), 'listening.html'))).toBe(true);
      const { page, seen, context } = await open(join(at('all'), 'listening.html'));
      await page.click('#play');
      await until(page, "parseFloat(document.querySelector('#clock').textContent) > 0.2");
      expect(await page.textContent('h1')).toBe('Bench trial');
      expect(await page.textContent('#in-words')).toMatch(/‘brighter’ is \d+\.\d dB brighter at 5 kHz than ‘as found’/);
      expect(seen).toEqual([]);
      await context.close();
    });

    it('plays every variant, and changes between them at the same instant without a click', async () => {
      const { page, context } = await open(join(at('all'), 'listening.html'));
      for (const key of ['2', '3', '4', '1']) {
        await page.keyboard.press(key);
        await wholeHeard(page);
      }
      await play(page);
      for (const key of ['2', '3', '4']) {
        await page.waitForTimeout(300);
        await page.keyboard.press(key);
      }
      await page.waitForTimeout(400);
      await page.click('#play');
      await page.waitForTimeout(100);
      const heard = await recorded(page);
      await context.close();
      const sounds = ['as found', 'restored', 'brighter', 'changed'].map((name) => sound('all', name));
      const begin = heard.findIndex((value) => value !== 0);
      expect(begin).toBeGreaterThanOrEqual(0);
      const { frame, worst } = placeOf(heard, begin + 2000, 400, sounds[0]!, VOLUME);
      // 24-bit steps of the file and the 32-bit floats of the player, a hundredth of what could be heard
      expect(worst).toBeLessThan(1e-6);
      const start = begin + 2000 - frame;
      // which sound every sample is, at that one start of the programme; −1: a mixture
      const which: number[] = [];
      for (let n = start + 1000; n < heard.length; n++) {
        const all = sounds.map((one) => Math.abs(heard[n]! - VOLUME * (one[n - start] ?? 0)) < 1e-6);
        const same = which[which.length - 1];
        which.push(same !== undefined && same >= 0 && all[same] ? same : all.indexOf(true));
      }
      const runs: { sound: number; frames: number; from: number }[] = [];
      which.forEach((one, n) => {
        const last = runs[runs.length - 1];
        if (last && last.sound === one) last.frames++;
        else runs.push({ sound: one, frames: 1, from: n });
      });
      const long = runs.filter(({ sound: one, frames }) => one >= 0 && frames > 2000).map(({ sound: one }) => one);
      // the same start holds for all four: the place is kept to the sample, where 5 ms would be 240
      expect(long.slice(0, 4)).toEqual([0, 1, 2, 3]);
      // between two sounds lies the fade of 12 ms and nothing longer
      for (const [a, b] of [
        [0, 1],
        [1, 2],
        [2, 3],
      ] as const) {
        const [longA, longB] = [a, b].map((one) => runs.find((run) => run.sound === one && run.frames > 2000)!);
        const lastOfA = longA!.from + longA!.frames - 1;
        const firstOfB = longB!.from;
        expect(firstOfB - lastOfA).toBeLessThan(0.014 * RATE);
        // within the fade: a raised cosine's mixture of the two, to −60 dB of full scale
        const [x, y] = [sounds[a]!, sounds[b]!];
        let least = Number.POSITIVE_INFINITY;
        for (let first = lastOfA - 40; first <= lastOfA + 1; first++) {
          let residue = 0;
          for (let n = 0; n < 576; n++) {
            const share = 0.5 - 0.5 * Math.cos((Math.PI * (n + 1)) / 576);
            const place = first + n + 1000;
            const mixed = (1 - share) * (x[place] ?? 0) + share * (y[place] ?? 0);
            residue = Math.max(residue, Math.abs(heard[start + place]! - VOLUME * mixed));
          }
          least = Math.min(least, residue);
        }
        expect(least).toBeLessThan(0.001 * VOLUME);
      }
    });

    it('hears a changed bypass, and saves it as the command writes it', async () => {
      const { page, context, seen } = await open(join(at('all'), 'listening.html'));
      await page.keyboard.press('2');
      // round and round, so that no machine is too slow for the clip
      await page.keyboard.press('l');
      await play(page);
      await page.focus('[data-key="plate.bypass"]');
      expect(await page.getAttribute('[data-key="plate.bypass"]', 'aria-valuetext')).toBe('1 nF');
      await page.keyboard.press('ArrowDown');
      await until(
        page,
        `document.querySelector('[data-key="plate.bypass"]').getAttribute('aria-valuetext') === '820 pF'`,
      );
      await until(page, "document.querySelector('#hear-bench').getAttribute('aria-pressed') === 'true'");
      await wholeHeard(page);
      await page.waitForTimeout(500);
      await page.click('#play');
      await page.waitForTimeout(100);
      const heard = await recorded(page);
      const last = heard.findLastIndex((value) => value !== 0);
      const changed = sound('all', 'changed');
      // two places: one of them may lie in the loop's own fade
      const places = [8000, 5000].map((back) => placeOf(heard, last - back, 400, changed, VOLUME).worst);
      expect(Math.min(...places)).toBeLessThan(1e-6);
      await page.fill('#keep-name', 'kept one');
      await until(page, "document.querySelector('#response .legend').textContent.includes('On the bench')");
      await page.click('#keep');
      await page.waitForSelector('#hear-5');
      const wav = readWav(await saved(page, '#save-wav-5'), 'kept').channels[0]!;
      expect(wav.length).toBe(changed.length);
      // 1 part in 2^23: a step of the 24-bit file
      expect(wav.reduce((most, value, n) => Math.max(most, Math.abs(value - changed[n]!)), 0)).toBeLessThanOrEqual(
        2 ** -23,
      );
      const own = readWav(await saved(page, '#save-wav-3'), 'own').channels[0]!;
      const brighter = sound('all', 'brighter');
      expect(own.reduce((most, value, n) => Math.max(most, Math.abs(value - brighter[n]!)), 0)).toBeLessThanOrEqual(
        2 ** -23,
      );
      expect(seen).toEqual([]);
      await context.close();
    });

    it('keeps notes and variants in the saved page', async () => {
      const { page, context } = await open(join(at('all'), 'listening.html'));
      await page.fill('#notes', 'Found 2n2 on the plate.\nTook <b>1 nF</b>.');
      await page.keyboard.press('Escape');
      await page.focus('[data-key="plate.bypass"]');
      await page.keyboard.press('Enter');
      await page.fill('#typed-value', '470p');
      await page.keyboard.press('Enter');
      await page.waitForSelector('#hear-bench');
      await until(page, "document.querySelector('#response .legend').textContent.includes('On the bench')");
      await wholeHeard(page);
      await page.fill('#keep-name', 'half way');
      await page.click('#keep');
      await page.waitForSelector('#hear-5');
      writeFileSync(at('saved.html'), await saved(page, '#save-page'));
      const list = (await saved(page, '#save-list')).toString('utf8');
      const table = (await saved(page, '#save-markdown')).toString('utf8');
      await context.close();
      expect(list).toContain('plate.bypass: 470p');
      expect(table).toContain('half way');
      writeFileSync(at('saved.yaml'), list);
      const again = JSON.parse(command.run('respond', 'saved.yaml', '--json')) as { variants: { name: string }[] };
      expect(again.variants.map(({ name }) => name)).toEqual([
        'as found',
        'restored',
        'brighter',
        'changed',
        'half way',
      ]);

      const second = await open(at('saved.html'));
      expect(await second.page.inputValue('#notes')).toBe('Found 2n2 on the plate.\nTook <b>1 nF</b>.');
      const names = await second.page.locator('.choices button.variant').allTextContents();
      expect(names.map((name) => name.replace(/^\d/, ''))).toEqual([
        'as found',
        'restored',
        'brighter',
        'changed',
        'half way',
      ]);
      await second.page.keyboard.press('5');
      expect(await second.page.getAttribute('[data-key="plate.bypass"]', 'aria-valuetext')).toBe('470 pF');
      expect(second.seen).toEqual([]);
      await second.context.close();
    });

    it('runs a blind test that gives nothing away, and prints the exact probability', async () => {
      const { page, context } = await open(join(at('all'), 'listening.html'));
      for (const key of ['1', '2', '3', '4']) {
        await page.keyboard.press(key);
        await wholeHeard(page);
      }
      await page.selectOption('#blind-first', 'restored');
      await page.selectOption('#blind-second', 'brighter');
      await page.fill('#blind-trials', '16');
      await page.click('#blind-start');
      const looks = new Set<string>();
      for (let trial = 1; trial <= 16; trial++) {
        const look: string = await page.evaluate(`(() => {
          const page = document.querySelector('main').cloneNode(true);
          for (const moving of page.querySelectorAll('#clock, #place, .outline')) moving.remove();
          return page.innerHTML.replace(/Trial \\d+ of 16/, '');
        })()`);
        looks.add(look);
        await page.click('#blind-answer-a');
      }
      // every trial looks like every other, whatever it hides
      expect(looks.size).toBe(1);
      const outcome = (await page.textContent('#blind-outcome')) ?? '';
      const right = Number(/(\d+) of 16 right/.exec(outcome)![1]);
      expect(await page.textContent('#blind-probability')).toBe(guessProbability(right, 16).toFixed(6));
      expect(outcome).toContain('‘restored’ against ‘brighter’');
      await context.close();
    });

    it('refuses a value that cannot be, in words, and goes on with what was heard', async () => {
      const { page, context } = await open(join(at('all'), 'listening.html'));
      await page.focus('[data-key="plate.bypass"]');
      await page.keyboard.press('Enter');
      await page.fill('#typed-value', '47q');
      await page.keyboard.press('Enter');
      await until(page, "document.querySelector('#drawing .fault').textContent !== ''");
      expect(await page.textContent('#drawing .fault')).toMatch(/plate\.bypass: found 47q; expected a capacitance/);
      expect(await page.getAttribute('[data-key="plate.bypass"]', 'aria-valuetext')).toBe('2.2 nF');
      expect(await page.getAttribute('#hear-1', 'aria-pressed')).toBe('true');
      await context.close();
    });

    it('tries another line of the list, keeps it and takes it away again', async () => {
      const { page, context, seen } = await open(join(at('all'), 'listening.html'));
      await page.selectOption('#other-line', 'detector.tube');
      await page.fill('#other-value', '76');
      await page.click('#other-set');
      await until(page, "document.querySelector('svg.circuit').textContent.includes('76')");
      expect(await page.textContent('#drawing .lead')).toBe('On the bench');
      await page.fill('#keep-name', 'with a 76');
      await page.click('#keep');
      expect(await page.locator('.choices button.variant').count()).toBe(5);
      await page.click('#remove');
      expect(await page.locator('.choices button.variant').count()).toBe(4);
      await page.fill('#other-value', '6SL8');
      await page.click('#other-set');
      await until(page, "document.querySelector('#drawing .fault').textContent.includes('6SL8')");
      expect(seen).toEqual([]);
      await context.close();
    });

    it('can be walked by the keyboard alone, every control with a name and a visible focus', async () => {
      const { page, context } = await open(join(at('all'), 'listening.html'));
      const wanted: string[] =
        await page.evaluate(`[...document.querySelectorAll('button, input, select, textarea, summary, [tabindex="0"]')]
        .filter((one) => one.checkVisibility() && !one.disabled && !one.closest('details:not([open]) > :not(summary)'))
        .map((one) => one.id || one.getAttribute('data-key') || one.getAttribute('aria-label') || one.textContent)`);
      const reached = new Set<string>();
      for (let press = 0; press < wanted.length + 20; press++) {
        await page.keyboard.press('Tab');
        const [name, ring]: [string, boolean] = await page.evaluate(`(() => {
          const one = document.activeElement;
          const style = getComputedStyle(one);
          const inner = one.querySelector('rect');
          const ring = (style.outlineStyle !== 'none' && parseFloat(style.outlineWidth) >= 2) ||
            (inner !== null && parseFloat(getComputedStyle(inner).strokeWidth) >= 2);
          return [one.id || one.getAttribute('data-key') || one.getAttribute('aria-label') || one.textContent, one === document.body || ring];
        })()`);
        expect([name, ring]).toEqual([name, true]);
        reached.add(name);
      }
      expect(wanted.filter((name) => !reached.has(name))).toEqual([]);
      await page.focus('#play');
      await page.keyboard.press('Space');
      await until(page, "document.querySelector('#play').textContent === 'Pause'");
      await page.focus('[data-key="plate.bypass"]');
      await page.keyboard.press('Delete');
      await until(
        page,
        `document.querySelector('[data-key="plate.bypass"]').getAttribute('aria-valuetext') === 'absent'`,
      );
      expect(await page.evaluate("document.activeElement.getAttribute('data-key')")).toBe('plate.bypass');
      await page.focus('#marked');
      const before = await page.textContent('#readout');
      await page.keyboard.press('ArrowLeft');
      expect(await page.textContent('#readout')).not.toBe(before);
      await context.close();
    });

    it('has no serious fault of accessibility, light and dark, and scrolls sideways at no width', async () => {
      const { page, context } = await open(join(at('all'), 'listening.html'));
      const rules = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8');
      await page.evaluate(rules);
      for (const [width, colorScheme] of [
        [1280, 'light'],
        [360, 'dark'],
      ] as const) {
        await page.setViewportSize({ width, height: 800 });
        await page.emulateMedia({ colorScheme });
        const found: { violations: { id: string; impact: string; nodes: { html: string }[] }[] } =
          await page.evaluate('axe.run(document)');
        const serious = found.violations
          .filter(({ impact }) => impact === 'serious' || impact === 'critical')
          .map(({ id, nodes }) => `${id}: ${nodes.map(({ html }) => html.slice(0, 200)).join(' | ')}`);
        expect(serious).toEqual([]);
        expect(await page.evaluate('document.documentElement.scrollWidth')).toBe(width);
      }
      await context.close();
    });

    it('shows whatever stands in the list as text', async () => {
      const evil = '<img src=x onerror=document.title="taken">';
      writeFileSync(
        at('evil.yaml'),
        `name: '${evil}'\ntuned circuit: { loaded Q: 40 }\nvariants:\n  '</script><script>document.title="taken"</script><!--': {}\n  other: { plate.bypass: 1n }\n`,
      );
      command.run('render', 'clip.wav', 'evil.yaml', '--out', 'evil', '--quiet');
      const { page, seen, context } = await open(join(at('evil'), 'listening.html'));
      expect(await page.textContent('h1')).toBe(evil);
      expect(await page.locator('img').count()).toBe(0);
      expect(await page.title()).toBe(`${evil}: listening page`);
      expect(seen).toEqual([]);
      await context.close();
    });

    it('draws and changes every load and detector, carrier choke, dropping resistor, and the textbook laws', async () => {
      noisyClip(at('short.wav'), 0.3);
      writeFileSync(
        at('loads.yaml'),
        `tuned circuit: { loaded Q: 40 }
variants:
  transformer: { plate.load: transformer 1:3 }
  choke: { plate.load: choke 250 H, plate.carrier choke: 10 mH, plate.second bypass: 100p }
  phones: { plate.load: phones 2 kΩ }
  dropped: { plate.dropping resistor: 47k, detector.law: square }
  across: { detector.law: linear, detector.leak position: across capacitor }
  bend: { detector.kind: plate bend, station.level: 1 V }
  follower: { detector.kind: infinite impedance, station.level: 1 V }
  diode: { detector.kind: diode, station.level: 1 V }
`,
      );
      command.run('render', 'short.wav', 'loads.yaml', '--out', 'loads', '--quiet');
      const { page, seen, context } = await open(join(at('loads'), 'listening.html'));
      const keys = [
        'plate.load.ratio',
        'plate.carrier choke',
        'plate.load.dc resistance',
        'plate.dropping resistor',
        'detector.leak',
        'detector.cathode resistor',
        'output.coupling',
        'detector.diode bypass',
      ];
      for (const [k, key] of keys.entries()) {
        await page.click(`#hear-${k + 1}`);
        const control = `[data-key="${key}"]`;
        const before = await page.getAttribute(control, 'aria-valuetext');
        await page.focus(control);
        await page.keyboard.press('ArrowUp');
        await until(page, `document.querySelector('#hear-bench')?.getAttribute('aria-pressed') === 'true'`);
        await wholeHeard(page);
        expect([key, await page.getAttribute(control, 'aria-valuetext')]).not.toEqual([key, before]);
        expect(await page.textContent('#drawing .fault')).toBe('');
      }
      expect(seen).toEqual([]);
      await context.close();
    });
  });
}
