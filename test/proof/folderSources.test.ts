import { createHash } from 'node:crypto';
import { readFile, writeFile } from 'node:fs/promises';
import sharp from 'sharp';
import { expect, it } from 'vitest';
import { folderSources } from '../../main/proof/folderSources.ts';
import { ProofPainter } from '../../main/proof/proofPainter.ts';
import { temporaryFolder } from '../files/temporaryFolder.ts';

const folder = temporaryFolder();

const figures = {
  lightness: 52.34,
  contrast: 18.06,
  chroma: 21.5,
  redGreen: 1,
  yellowBlue: 2,
  planeMm: 0.5,
  coherence01: 0.2,
  lineCoverage01: 0.0312,
  focus: 0.9,
  flatShare01: 0.4,
};

async function painting(name: string, colour: string): Promise<string> {
  const create = { width: 30, height: 20, channels: 3, background: colour } as const;
  await sharp({ create }).png().toFile(folder.path(name));
  return createHash('sha256')
    .update(await readFile(folder.path(name)))
    .digest('hex');
}

it('takes captions from the log of a run, but not for a file that has changed since', async () => {
  const line = async (output: string, colour: string, more: object) => {
    const sha256 = await painting(output, colour);
    const said = { v: 1, kind: 'painted', time: '2031-04-05T12:00:00.000Z', name: `${output}.jpg`, key: 'k' };
    return JSON.stringify({ ...said, output, sha256, pixelsSha256: '', reason: '', parts: {}, ...more });
  };
  const lines = [
    await line('plate 1.png', 'teal', { figures: null, preset: 'Low Water · III', remarks: ['Too large.'] }),
    await line('plate 2.png', 'olive', { figures: { before: figures, after: figures } }),
    await line('plate 3.png', 'navy', { figures: { before: figures, after: figures } }),
    await line('plate 4.png', 'grey', { figures: { after: { lightness: 'dark' } } }),
  ];
  await writeFile(folder.path('run.oxgall.jsonl'), `${lines.join('\n')}\n`);
  await painting('plate 3.png', 'maroon');
  const painter = new ProofPainter(1);
  const { sources } = await folderSources(folder.path('.'), painter);
  await painter.close();
  const plain = { preset: '', figures: [], note: '' };
  expect(sources.map(({ caption }) => caption)).toEqual([
    { name: 'plate 1.png', preset: 'Low Water · III', figures: [], note: 'Too large.' },
    {
      ...plain,
      name: 'plate 2.png',
      figures: ['Lightness 52.3 · Contrast 18.1 · Chroma 21.5 · Line coverage 3.12 %'],
    },
    { ...plain, name: 'plate 3.png' },
    { ...plain, name: 'plate 4.png' },
  ]);
});
