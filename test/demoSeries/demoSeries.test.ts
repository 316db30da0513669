// The demo series: the same bytes every time, plates that differ as a real series does, whole files only.
import { createHash } from 'node:crypto';
import { mkdtemp, readdir, readFile, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import sharp from 'sharp';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { listDemoSeries, type RenderedPlate, renderDemoSeries } from '../../build/demoSeries/render.mjs';

const scale = 0.04;
let root: string;
let plates: RenderedPlate[];
const seen: string[] = [];

const hashOf = async (path: string) =>
  createHash('sha256')
    .update(await readFile(path))
    .digest('hex');

beforeAll(async () => {
  root = await mkdtemp(join(tmpdir(), 'demo-series-'));
  plates = await renderDemoSeries({
    outDir: join(root, 'all'),
    scale,
    onFrame: ({ name }) => seen.push(name),
  });
});

afterAll(() => rm(root, { recursive: true, force: true }));

describe('the demo series', () => {
  it('writes every plate once, named in order, and nothing else', async () => {
    const names = listDemoSeries().map(({ name }) => name);
    expect(names.length).toBeGreaterThanOrEqual(8);
    expect(plates.map(({ name }) => name)).toEqual(names);
    expect([...seen].sort()).toEqual([...names].sort());
    expect((await readdir(join(root, 'all'))).sort()).toEqual([...names].sort());
  });

  it('gives the same bytes again, in another order and on one thread', async () => {
    const again = await renderDemoSeries({
      outDir: join(root, 'again'),
      scale,
      numbers: [6, 2, 3],
      workers: 1,
    });
    for (const plate of again)
      expect(await hashOf(plate.path)).toBe(await hashOf(join(root, 'all', plate.name)));
  });

  it('carries orientation tags that bring each plate upright', async () => {
    const tags = new Set<number>();
    for (const plate of plates) {
      const { orientation = 1, width, height } = await sharp(plate.path).metadata();
      expect(orientation).toBe(plate.orientation);
      tags.add(orientation);
      const turned = orientation >= 5;
      expect([width, height]).toEqual(
        turned ? [plate.heightPx, plate.widthPx] : [plate.widthPx, plate.heightPx],
      );
      // the top of every plate but the view down on the hands is sky, lighter than what lies below
      const { data, info } = await sharp(plate.path).autoOrient().raw().toBuffer({ resolveWithObject: true });
      expect([info.width, info.height]).toEqual([plate.widthPx, plate.heightPx]);
      const lightness = (from: number, to: number) => {
        let sum = 0;
        for (let y = Math.floor(from * info.height); y < to * info.height; y++)
          for (let x = 0; x < info.width; x++) {
            const at = (y * info.width + x) * 3;
            sum += data[at] + data[at + 1] + data[at + 2];
          }
        return sum / ((to - from) * info.width * info.height);
      };
      if (!plate.name.includes('hands')) expect(lightness(0, 0.12)).toBeGreaterThan(lightness(0.8, 1));
    }
    expect(tags).toEqual(new Set([1, 3, 6]));
  });

  it('differs from plate to plate in size, exposure and colour', async () => {
    const sizes = new Set(plates.map(({ widthPx, heightPx }) => `${widthPx}×${heightPx}`));
    expect(sizes.size).toBeGreaterThanOrEqual(6);
    const stats = await Promise.all(plates.map(({ path }) => sharp(path).stats()));
    const means = stats.map(({ channels }) => (channels[0].mean + channels[1].mean + channels[2].mean) / 3);
    expect(Math.max(...means) - Math.min(...means)).toBeGreaterThan(50);
    const warmth = stats.map(({ channels }) => channels[0].mean - channels[2].mean);
    expect(Math.max(...warmth) - Math.min(...warmth)).toBeGreaterThan(40);
    // tones like a photograph's: no plate is flat, none is mostly clipped
    for (const { channels } of stats) for (const { stdev } of channels) expect(stdev).toBeGreaterThan(8);
  });

  it('stops at once when asked and leaves no half-written file', async () => {
    const stop = new AbortController();
    const outDir = join(root, 'stopped');
    const run = renderDemoSeries({ outDir, scale: 0.1, signal: stop.signal, onFrame: () => stop.abort() });
    await expect(run).rejects.toThrow(/abort/i);
    const left = await readdir(outDir);
    expect(left.length).toBeLessThan(listDemoSeries().length);
    for (const name of left) expect((await sharp(join(outDir, name)).metadata()).format).toBe('jpeg');
  });

  it('refuses a plate or a scale that is not there', async () => {
    await expect(renderDemoSeries({ outDir: root, numbers: [99] })).rejects.toThrow(
      'expected a plate from 1 to',
    );
    await expect(renderDemoSeries({ outDir: root, scale: 0 })).rejects.toThrow('expected a scale');
  });
});
