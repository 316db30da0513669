// Writes pictures of the screens to artefacts/screens, for looking at. `node build/takeScreens.mjs [photo]`
import { spawn } from 'node:child_process';
import { access, copyFile, mkdir, mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { basename, dirname, join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { chromium } from 'playwright-core';

const root = join(dirname(fileURLToPath(import.meta.url)), '..');
const folder = join(root, 'artefacts/screens');
const sizes = [
  { width: 1280, height: 800 },
  { width: 2560, height: 1440 },
];
const usualBrowsers = ['/usr/bin/chromium', '/usr/bin/chromium-browser', '/usr/bin/google-chrome'];

async function findBrowser() {
  for (const path of [process.env.OXGALL_CHROMIUM, ...usualBrowsers]) {
    const isThere =
      path &&
      (await access(path)
        .then(() => true)
        .catch(() => false));
    if (isThere) return path;
  }
  throw new Error('No Chromium found: name one in OXGALL_CHROMIUM.');
}

/** Starts the built program without a window; without a photo it shows the first screen. */
async function startProgram(data, photo) {
  const given = [join(root, 'dist/main/loopbackShell.js'), '--no-window', ...(photo ? [photo] : [])];
  const program = spawn(process.execPath, given, {
    env: { ...process.env, OXGALL_DATA: data },
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  let said = '';
  for await (const chunk of program.stdout) {
    said += chunk;
    const address = /http:\/\/\S+/.exec(said)?.[0];
    if (address) return { program, address };
  }
  throw new Error(`The program said no address: ${said}`);
}

const settled = (page) =>
  page.locator('.window[data-painting="no"][data-rough="false"]').waitFor({ timeout: 60_000 });

async function takeEasel(page, keep) {
  await settled(page);
  await page
    .locator('.preset-picture canvas.is-there')
    .first()
    .waitFor({ state: 'attached', timeout: 100 })
    .catch(() => {});
  await keep('easel-body');
  await page.keyboard.press('i');
  await keep('easel-line');
  await page.keyboard.press('g');
  await keep('easel-ground');
  await page.keyboard.press('p');
  await page.locator('.preset-picture canvas.is-there').first().waitFor();
  await keep('easel-presets');
  await page.keyboard.press('b');
  await page.keyboard.press('c');
  await keep('easel-compare');
  await page.keyboard.press('c');
  await takeStates(page, keep);
  await page.keyboard.press('1');
  await settled(page);
  await page.getByText('Finer points').click();
  await page.getByRole('radio', { name: 'Dark surround' }).check({ force: true });
  await keep('easel-full-size-dark');
  await page.getByRole('radio', { name: 'Light surround' }).check({ force: true });
  await page.keyboard.press('0');
  await settled(page);
  await keep('easel-light');
  await page.keyboard.press('?');
  await keep('keys');
  await page.keyboard.press('Escape');
  await page.keyboard.press('Control+s');
  await keep('save');
  await page.keyboard.press('Escape');
  await page.keyboard.press('Control+o');
  await page.locator('.folder').waitFor();
  await keep('open');
}

async function typeValue(page, name, value) {
  const field = page.getByRole('textbox', { name: `${name}, typed` });
  await field.fill(value);
  await field.press('Enter');
  // Keys are letters again.
  await field.blur();
}

async function keepState(page, note) {
  await page.keyboard.press('k');
  await page.keyboard.type(note);
  await page.keyboard.press('Enter');
  await page.getByRole('button', { name: 'Keep as new state' }).waitFor();
}

/** The thread with a few states, a branch and a delivery; one state's card; two states compared. */
async function takeStates(page, keep) {
  const card = page.locator('.state-card');
  const point = async (numeral) => {
    await page.getByRole('button', { name: new RegExp(`^State ${numeral}(,|$)`) }).hover();
    await card.locator('canvas.is-there').waitFor();
  };
  await page.keyboard.press('b');
  await typeValue(page, 'Brush', '6');
  await typeValue(page, 'Hold', '0.1');
  await keepState(page, 'broader, for the cover');
  await page.keyboard.press('i');
  await typeValue(page, 'Ink width', '0.9');
  await keepState(page, 'more ink on the heron');
  await settled(page);
  await page.keyboard.press('Control+s');
  await page.getByRole('dialog').getByRole('button', { name: 'Save', exact: true }).click();
  await page.getByRole('heading', { name: 'Saved' }).waitFor({ timeout: 120_000 });
  await page.keyboard.press('Escape');
  await point('I');
  await card.getByRole('button', { name: 'Return to I' }).click();
  await page.getByRole('button', { name: /^State IV/ }).waitFor();
  await point('IV');
  await card.getByRole('textbox', { name: 'Branch' }).fill('for the cover');
  await card.getByRole('textbox', { name: 'Branch' }).press('Enter');
  await page.mouse.move(400, 450);
  await page.keyboard.press('b');
  await typeValue(page, 'Hold', '0.5');
  await page.keyboard.press('k');
  await keep('states-keeping');
  await page.keyboard.press('Escape');
  await point('III');
  await keep('states-card');
  await card.getByRole('combobox').selectOption({ index: 2 });
  await page.mouse.move(400, 450);
  await page.locator('.compare-table').waitFor();
  await settled(page);
  await keep('states-compare');
  await page.keyboard.press('Escape');
  await page.keyboard.press('p');
  await page.getByRole('button', { name: 'Make a preset of this…' }).click();
  await page.keyboard.type('Heron at dusk');
  await page.keyboard.press('Enter');
  await page.locator('.preset', { hasText: 'Heron at dusk' }).click();
  await page.getByRole('button', { name: 'Rename…' }).click();
  await keep('presets-own');
  await page.keyboard.press('Escape');
  await page.keyboard.press('Control+z');
  await page.keyboard.press('Control+z');
  await page.keyboard.press('b');
  await settled(page);
}

async function takeFirst(page, keep, withDemo) {
  await page.locator('button:enabled', { hasText: 'Open a photograph…' }).waitFor();
  await keep('first');
  const demo = page.getByRole('button', { name: /demo/ });
  if (!withDemo || (await demo.count()) === 0) return;
  await demo.click();
  const frame = page.getByRole('button', { name: /^plate-2-ferry/ });
  // The plates are rendered when they are first asked for.
  await frame.first().waitFor({ timeout: 300_000 });
  await keep('wall');
  await frame.first().dblclick();
  await takeEasel(page, keep);
}

async function main() {
  const photo = process.argv[2] ? resolve(process.argv[2]) : null;
  await mkdir(folder, { recursive: true });
  const browser = await chromium.launch({
    executablePath: await findBrowser(),
    args: ['--disable-background-networking', ...(process.getuid?.() === 0 ? ['--no-sandbox'] : [])],
  });
  for (const size of sizes) {
    const data = await mkdtemp(join(tmpdir(), 'oxgall-screens-'));
    // A recipe is written beside the photo: a copy keeps the original's folder as it was.
    const copied = photo && join(data, basename(photo));
    if (copied) await copyFile(photo, copied);
    for (const opened of copied ? [copied, null] : [null]) {
      const { program, address } = await startProgram(data, opened);
      const page = await browser.newPage({ viewport: size });
      page.on(
        'console',
        (message) => message.type() === 'error' && process.stderr.write(`${message.text()}\n`),
      );
      page.on('pageerror', (error) => process.stderr.write(`${error.stack}\n`));
      const keep = (name) => page.screenshot({ path: join(folder, `${name}-${size.width}.png`) });
      try {
        await page.goto(address);
        if (opened) await takeEasel(page, keep);
        else await takeFirst(page, keep, photo === null);
      } finally {
        program.kill();
        await page.close();
      }
    }
    await rm(data, { recursive: true, force: true });
  }
  await browser.close();
  process.stdout.write(`screens are in ${folder}\n`);
}
await main();
