import { mkdir, mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import sharp from 'sharp';
import { createHostCaller, type HostCaller } from '../../core/hostProtocol/hostCaller.ts';
import { readPhoto } from '../../main/files/readPhoto.ts';
import { writePicture } from '../../main/files/writePicture.ts';
import type { HostCommands } from '../../main/host/api/hostCommands.ts';
import { describeProfile } from '../../main/host/describeProfile.ts';
import { createHost, type Host } from '../../main/host/host.ts';
import type { HostParts } from '../../main/host/hostParts.ts';
import { readFacts, readQuick } from '../../main/host/quickPicture.ts';
import { readGamutTable } from '../../main/host/readGamutTable.ts';
import { readScreenTable } from '../../main/host/readScreenTable.ts';
import { deliverPainting } from '../../main/painting/deliverPainting.ts';
import { holdPhoto } from '../../main/painting/holdPhoto.ts';
import { paintPrepared } from '../../main/painting/paintPrepared.ts';
import { readForPrint } from '../../main/painting/readForPrint.ts';
import { openStores } from '../../main/store/openStores.ts';
import { BlurEngine } from './blurEngine.ts';

export const base = 'http://127.0.0.1:1';

/** A host over a plain engine and real files, in a folder of its own. */
export interface TestHost {
  host: Host;
  engine: BlurEngine;
  parts: HostParts;
  caller: HostCaller<HostCommands>;
  /** Holds the photos. */
  photos: string;
  folder: string;
  /** Sends JSON as a window would and gives the raw answer. */
  post(name: string, input: unknown, headers?: Record<string, string>): Promise<Response>;
  close(): Promise<void>;
}

export async function makeTestHost(changes: Partial<HostParts> = {}): Promise<TestHost> {
  const folder = await mkdtemp(join(tmpdir(), 'oxgall-host-'));
  const photos = join(folder, 'photos');
  await mkdir(photos);
  const engine = new BlurEngine();
  const parts: HostParts = {
    shell: 'loopback',
    appVersion: '0.0.0-test',
    workers: 1,
    loadEngine: async () => engine,
    loadFiles: async () => ({
      readPhoto,
      holdPhoto,
      readForPrint,
      paintPrepared,
      deliverPainting,
      writePicture,
      readFacts,
      readQuick,
      readScreenTable,
      describeProfile,
      readGamutTable,
    }),
    loadStores: async () => openStores(join(folder, 'data')),
    loadComposeSmall: async () => async (strata) => {
      const rgba = new Uint8Array(strata.widthPx * strata.heightPx * 4).fill(255);
      for (let i = 0; i < strata.widthPx * strata.heightPx; i += 1)
        for (let c = 0; c < 3; c += 1) rgba[i * 4 + c] = strata.body[i * 3 + c] >> 8;
      return rgba;
    },
    demo: null,
    desktop: { capabilities: { fileDialogs: false, droppedPaths: false, revealFiles: false, menu: false } },
    dataFolder: join(folder, 'data'),
    ...changes,
  };
  const host = createHost(parts);
  const post: TestHost['post'] = (name, input, headers = {}) =>
    host.fetch(
      new Request(`${base}/api/${name}`, {
        method: 'POST',
        headers: { 'content-type': 'application/json', ...headers },
        body: typeof input === 'string' ? input : JSON.stringify(input),
      }),
    );
  return {
    host,
    engine,
    parts,
    caller: createHostCaller<HostCommands>({ fetch: (request) => host.fetch(request), base }),
    photos,
    folder,
    post,
    close: async () => {
      await host.close();
      await rm(folder, { recursive: true, force: true });
    },
  };
}

/** Writes a photo of soft stripes. */
export async function makePhoto(path: string, widthPx: number, heightPx: number): Promise<string> {
  const pixels = new Uint8Array(widthPx * heightPx * 3);
  for (let i = 0; i < widthPx * heightPx; i += 1) {
    pixels[i * 3] = (i % widthPx) & 255;
    pixels[i * 3 + 1] = Math.floor(i / widthPx) & 255;
    pixels[i * 3 + 2] = 128;
  }
  await sharp(pixels, { raw: { width: widthPx, height: heightPx, channels: 3 } }).toFile(path);
  return path;
}
