import { mkdir, readdir, readFile, writeFile } from 'node:fs/promises';
import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { lying, papers } from '../../core/proof/paper.ts';
import { writePicture } from '../../main/files/writePicture.ts';
import { makeProof, type ProofOrder } from '../../main/proof/makeProof.ts';
import type { ProofPixels, ProofSource } from '../../main/proof/proofSource.ts';
import { temporaryFolder } from '../files/temporaryFolder.ts';
import { photographs } from '../fixtures/photographs.ts';
import { drawPdfPage, noPoppler, pdfFonts, pdfPages, pdfPictures, pdfText, takePictures } from './poppler.ts';

const folder = temporaryFolder();

const order = (out: string, changed: Partial<ProofOrder> = {}): ProofOrder => ({
  out: folder.path(out),
  paper: papers.a4,
  columns: 3,
  marginMm: 14,
  title: 'The Ferry at Low Water',
  date: new Date('2031-04-05T12:00:00Z'),
  ...changed,
});

function sourceOf(path: string, name = path.split('/').at(-1)!): ProofSource {
  return { picture: { path }, caption: { name, preset: 'Low Water · III', figures: [], note: '' } };
}

async function flatPicture(name: string, widthPx: number, heightPx: number, colour: string): Promise<string> {
  const create = { width: widthPx, height: heightPx, channels: 3, background: colour } as const;
  const path = folder.path(name);
  await sharp({ create }).png().toFile(path);
  return path;
}

const photos = () => Object.values(photographs).map((path, k) => sourceOf(path, `plate ${k + 1}.jpg`));

describe.skipIf(noPoppler)(`a PDF sheet, read by Poppler${noPoppler ? ` (${noPoppler})` : ''}`, () => {
  it('has the paper asked for, its type embedded, and pictures of 200 pixels an inch and more', async () => {
    const { out } = order('six.pdf');
    const made = await makeProof(photos(), order('six.pdf'));
    expect(made).toMatchObject({ files: [out], pages: 1, frames: 6, faults: [], remarks: [] });
    const [page, ...others] = await pdfPages(out);
    expect(others).toEqual([]);
    expect(page.widthPt).toBeCloseTo((210 / 25.4) * 72, 1);
    expect(page.heightPt).toBeCloseTo((297 / 25.4) * 72, 1);
    // Its RGB is told to be sRGB: ISO 32000-1, 14.11.5.
    expect((await readFile(out)).toString('latin1')).toMatch(/\/OutputIntents \[\d+ 0 R\]/);
    const fonts = await pdfFonts(out);
    expect(fonts.length).toBeGreaterThanOrEqual(3);
    for (const font of fonts) expect(font).toMatchObject({ embedded: true, subset: true });
    const pictures = await pdfPictures(out);
    expect(pictures).toHaveLength(6);
    for (const { encoding, xPpi, yPpi } of pictures) {
      expect(encoding).toBe('jpeg');
      expect(Math.min(xPpi, yPpi)).toBeGreaterThanOrEqual(200);
    }
  });

  it('says title, date, names, preset, state and page', async () => {
    const sources = photos();
    sources[2].caption = {
      ...sources[2].caption,
      figures: ['Lightness 52.3 · Chroma 12.0'],
      note: 'Odd one out.',
    };
    const { files } = await makeProof(sources, order('words.pdf'));
    const text = await pdfText(files[0]);
    const words = ['The Ferry at Low Water', '5 April 2031', '6 frames', 'Low Water · III', '1 / 1'];
    for (const word of [...words, 'Lightness 52.3 · Chroma 12.0', 'Odd one out.', '1024 × 819 px'])
      expect(text).toContain(word);
    for (const { caption } of sources) expect(text).toContain(caption.name);
  });

  it('keeps the words of other alphabets, and of letters that the typeface lacks', async () => {
    const path = photographs.nagasakiBoats;
    const names = [
      'Übergang – Été.png',
      'Паром.png',
      'Πορθμείο.png',
      'bến phà.png',
      '渡し船.png',
      'Cafe\u0301.png',
    ];
    const { files, remarks } = await makeProof(
      names.map((name) => sourceOf(path, name)),
      order('alphabets.pdf', { title: 'Паром' }),
    );
    const text = (await pdfText(files[0])).normalize('NFC');
    for (const name of names) expect(text).toContain(name.normalize('NFC'));
    expect(remarks).toEqual(['渡し船.png: some letters are not in the typeface and are printed as boxes.']);
  });

  it('lets a name be found that was broken into lines or shortened', async () => {
    const names = [
      'the ferry at low water, second plate of the morning.png',
      `${'very-'.repeat(40)}long-7.tif`,
    ];
    const { files } = await makeProof(
      names.map((name) => sourceOf(photographs.nagasakiBoats, name)),
      order('found.pdf', { columns: 4 }),
    );
    const text = await pdfText(files[0]);
    for (const name of names) expect(text.replaceAll('\n', '')).toContain(name);
    expect(text).not.toContain('…');
  });

  it('lays 200 frames on as many pages as they need, on paper that lies, every one once', async () => {
    const paths = await Promise.all([
      flatPicture('lying.png', 900, 600, '#8a6d3b'),
      flatPicture('upright.png', 600, 900, '#3b6d8a'),
    ]);
    const sources = Array.from({ length: 200 }, (_, k) =>
      sourceOf(paths[k % 5 === 0 ? 1 : 0], `plate ${k + 1}.png`),
    );
    const asked = order('many.pdf', { paper: lying(papers.a3), columns: 6 });
    const { pages, files } = await makeProof(sources, asked);
    const sizes = await pdfPages(files[0]);
    expect(sizes).toHaveLength(pages);
    for (const { widthPt, heightPt } of sizes) expect(widthPt).toBeGreaterThan(heightPt);
    const pictures = await pdfPictures(files[0]);
    expect(pictures).toHaveLength(200);
    expect(Math.min(...pictures.flatMap(({ xPpi, yPpi }) => [xPpi, yPpi]))).toBeGreaterThanOrEqual(200);
    const text = await pdfText(files[0]);
    for (const { caption } of sources) expect(text.split(caption.name)).toHaveLength(2);
    for (let page = 1; page <= pages; page++) expect(text).toContain(`${page} / ${pages}`);
  });

  it('prints a small picture at 200 pixels an inch instead of enlarging it', async () => {
    const path = await flatPicture('small.png', 120, 90, '#506070');
    const { files } = await makeProof([sourceOf(path)], order('small.pdf', { columns: 1 }));
    const [picture] = await pdfPictures(files[0]);
    expect(picture).toMatchObject({ widthPx: 120, heightPx: 90, xPpi: 200, yPpi: 200 });
  });

  it('shows colours as sRGB, whatever profile and orientation the file has', async () => {
    // sRGB (200, 60, 40) written in Display P3 by the image library, left half; the tag turns it upright.
    const left = { create: { width: 300, height: 400, channels: 3, background: '#c83c28' } } as const;
    const path = folder.path('p3-turned.jpg');
    const lyingFile = await sharp({ create: { ...left.create, width: 600, background: '#ffffff' } })
      .composite([{ input: left, left: 0, top: 0 }])
      .png()
      .toBuffer();
    await sharp(lyingFile)
      .withIccProfile('p3')
      .withMetadata({ orientation: 6, icc: 'p3' })
      .jpeg({ quality: 98, chromaSubsampling: '4:4:4' })
      .toFile(path);
    const { files } = await makeProof([sourceOf(path)], order('colour.pdf'));
    await takePictures(files[0], folder.path('colour'));
    const { data, info } = await sharp(folder.path('colour-000.jpg'))
      .raw()
      .toBuffer({ resolveWithObject: true });
    expect(info.width).toBeLessThan(info.height);
    // A quarter turn to the right puts the left half on top.
    const at = (x: number, y: number) =>
      [...data.subarray((y * info.width + x) * 3, (y * info.width + x) * 3 + 3)] as number[];
    const near = (found: number[], wanted: number[]) =>
      Math.max(...found.map((value, k) => Math.abs(value - wanted[k])));
    const middle = Math.floor(info.width / 2);
    expect(near(at(middle, 40), [200, 60, 40])).toBeLessThanOrEqual(3);
    expect(near(at(middle, info.height - 40), [255, 255, 255])).toBeLessThanOrEqual(2);
  });

  it('shows 16-bit colours of a wide space as sRGB too', async () => {
    // Display P3 (.9, .2, .1), decoded by the curve of IEC 61966-2-1, taken through the matrices of both sets of
    // primaries and encoded again, is (250.4, 4.6, −) in sRGB.
    const pixels = new Uint16Array(300 * 200 * 3).map((_, k) => [0.9, 0.2, 0.1][k % 3] * 65535);
    const raw = { width: 300, height: 200, channels: 3 } as const;
    const wide = await sharp({ create: { ...raw, background: 'red' } })
      .withIccProfile('p3')
      .png()
      .toBuffer();
    const { icc } = await sharp(wide).metadata();
    const path = folder.path('wide.tif');
    const picture = {
      widthPx: 300,
      heightPx: 200,
      channels: 3,
      pixels,
      format: 'tiff',
      iccProfile: icc,
    } as const;
    await writePicture(path, picture);
    const { files } = await makeProof([sourceOf(path)], order('wide.pdf'));
    await takePictures(files[0], folder.path('wide'));
    const { channels } = await sharp(folder.path('wide-000.jpg'), { ignoreIcc: true }).stats();
    [251, 4, 0].forEach((value, k) => {
      expect(Math.abs(channels[k].mean - value)).toBeLessThan(2);
    });
  });

  it('looks like the PNG of the same sheet, drawn by another hand', async () => {
    const { files: pdf } = await makeProof(photos(), order('same.pdf'));
    const { files: png } = await makeProof(photos(), order('same.png'));
    const drawn = await drawPdfPage(pdf[0], 1, 200, folder.path('same-drawn'));
    const half = (path: string) =>
      sharp(path).resize(827, 1169, { fit: 'fill' }).removeAlpha().raw().toBuffer();
    const [ours, theirs] = await Promise.all([half(png[0]), half(drawn)]);
    let difference = 0;
    let far = 0;
    ours.forEach((value, k) => {
      const step = Math.abs(value - theirs[k]);
      difference += step;
      if (step > 64) far++;
    });
    expect(difference / ours.length).toBeLessThan(1.5);
    expect(far / ours.length).toBeLessThan(0.01);
  });
});

describe('a sheet', () => {
  it('as PNG has the paper in pixels, its resolution, and numbers for several pages', async () => {
    const paper = { widthMm: 100, heightMm: 160 };
    const { files, pages } = await makeProof(photos(), order('card.png', { paper, columns: 1, marginMm: 8 }));
    expect(pages).toBeGreaterThan(1);
    expect(files).toEqual(Array.from({ length: pages }, (_, k) => folder.path(`card-${k + 1}.png`)));
    for (const file of files) {
      const { width, height, density } = await sharp(file).metadata();
      expect([width, height, density]).toEqual([
        Math.round((100 / 25.4) * 200),
        Math.round((160 / 25.4) * 200),
        200,
      ]);
    }
  });

  it('goes on when frames are broken, vanished or no pictures, and names them', async () => {
    const whole = await readFile(photographs.nagasakiBoats);
    const cut = await folder.file('cut.jpg', whole.subarray(0, whole.length / 3));
    const text = await folder.file('text.png', 'this is no picture');
    const empty = await folder.file('empty.tif', '');
    const sources = [
      ...photos().slice(0, 2),
      ...[cut, text, empty, folder.path('gone.jpg')].map((path) => sourceOf(path)),
    ];
    for (const out of ['broken.pdf', 'broken.png']) {
      const { faults, files } = await makeProof(sources, order(out));
      // What the header tells is noticed first.
      expect(faults.map(({ path }) => path)).toEqual([text, empty, folder.path('gone.jpg'), cut]);
      for (const { path, message } of faults) expect(message).toContain(path);
      if (out.endsWith('.png') || noPoppler) continue;
      const words = await pdfText(files[0]);
      for (const problem of ['is cut off before its end', 'holds text', 'is empty', 'there is no such file'])
        expect(words.replaceAll('\n', ' ')).toContain(problem);
      expect(await pdfPictures(files[0])).toHaveLength(2);
    }
  });

  it('takes pixels that are painted when their turn comes, at the size that is needed', async () => {
    const asked: { widthPx: number; heightPx: number }[] = [];
    const paint = async (needed: { widthPx: number; heightPx: number }): Promise<ProofPixels> => {
      asked.push(needed);
      return { widthPx: 800, heightPx: 600, channels: 4, pixels: new Uint8Array(800 * 600 * 4).fill(120) };
    };
    const picture = { path: 'heron.tif', widthPx: 8000, heightPx: 6000, paint };
    const { caption } = sourceOf('heron.tif');
    const { faults } = await makeProof([{ picture, caption }], order('painted.pdf'));
    expect(faults).toEqual([]);
    expect(asked).toHaveLength(1);
    expect(asked[0].widthPx).toBeGreaterThan(400);
    expect(asked[0].widthPx).toBeLessThan(800);
  });

  it('paints one picture at a time', async () => {
    let underWay = 0;
    let most = 0;
    const paint = async (): Promise<ProofPixels> => {
      most = Math.max(most, ++underWay);
      await new Promise((resolve) => setTimeout(resolve, 10));
      underWay--;
      return { widthPx: 300, heightPx: 200, channels: 3, pixels: new Uint8Array(300 * 200 * 3) };
    };
    const sources = Array.from({ length: 6 }, (_, k) => ({
      picture: { path: `plate ${k}`, widthPx: 300, heightPx: 200, paint },
      caption: sourceOf(`plate ${k}`).caption,
    }));
    await makeProof(sources, order('turns.pdf'));
    expect(most).toBe(1);
  });

  it('never lands on a frame of the series, and leaves nothing behind when it is stopped', async () => {
    const sources = photos();
    await mkdir(folder.path('stopped'));
    const path = folder.path('stopped/frame.png');
    await writeFile(path, await sharp(photographs.nagasakiBoats).png().toBuffer());
    await expect(makeProof([sourceOf(path)], order('stopped/frame.png'))).rejects.toThrow(
      /is the photo itself/,
    );
    const stop = new AbortController();
    const onProgress = (fraction01: number) => fraction01 > 0.3 && stop.abort(new Error('stopped'));
    for (const out of ['stopped/sheet.pdf', 'stopped/sheet.png'])
      await expect(makeProof(sources, order(out), { signal: stop.signal, onProgress })).rejects.toThrow(
        'stopped',
      );
    expect(await readdir(folder.path('stopped'))).toEqual(['frame.png']);
  });

  it('is a PDF or a PNG, nothing else', async () => {
    await expect(makeProof(photos(), order('sheet.docx'))).rejects.toThrow(/is a PDF or a PNG/);
  });
});
