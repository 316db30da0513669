import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { layProof } from '../../core/proof/layProof.ts';
import { lying, papers, readPaper } from '../../core/proof/paper.ts';
import {
  type ProofFrame,
  type ProofPage,
  type ProofSettings,
  styleTable,
  type TypeMeasure,
} from '../../core/proof/proofPage.ts';
import { wrapText } from '../../core/proof/wrapText.ts';

/** Every letter half as wide as its size. */
const evenType: TypeMeasure = {
  widthPt: (text, style) => [...text].length * styleTable[style].sizePt * 0.5,
};

function frame(widthPx: number, heightPx: number, name = 'plate.png'): ProofFrame {
  return {
    sizePx: { widthPx, heightPx },
    fault: '',
    caption: { name, preset: 'Low Water · III', figures: [`${widthPx} × ${heightPx} px`], note: '' },
  };
}

const settings = (changed: Partial<ProofSettings> = {}): ProofSettings => ({
  paper: papers.a4,
  columns: 3,
  marginMm: 14,
  title: 'The Ferry at Low Water',
  date: '1 December 2026',
  ...changed,
});

const textsOf = (page: ProofPage) => page.texts.map(({ text }) => text);

describe('paper', () => {
  it('knows the sizes of ISO 216 and ANSI Y14.1, and sizes in millimetres', () => {
    expect(readPaper('A4')).toEqual({ widthMm: 210, heightMm: 297 });
    expect(readPaper('a3')).toEqual({ widthMm: 297, heightMm: 420 });
    expect(readPaper('Letter')!.widthMm).toBeCloseTo(8.5 * 25.4, 9);
    expect(readPaper('Letter')!.heightMm).toBeCloseTo(11 * 25.4, 9);
    expect(readPaper('200 x 250')).toEqual({ widthMm: 200, heightMm: 250 });
    expect(readPaper('92.5×120mm')).toEqual({ widthMm: 92.5, heightMm: 120 });
    for (const none of ['', 'A99', '20x250', '200x', '200x5000', '-200x250', 'toString'])
      expect(readPaper(none), none).toBeNull();
    expect(lying(papers.a4)).toEqual({ widthMm: 297, heightMm: 210 });
    expect(lying(lying(papers.a4))).toEqual({ widthMm: 297, heightMm: 210 });
  });
});

describe('a line of a caption', () => {
  const wrap = (text: string, letters: number, lines: number) =>
    wrapText(text, 'name', letters * styleTable.name.sizePt * 0.5, lines, evenType);

  it('is left whole where it fits, and broken at a gap where it does not', () => {
    expect(wrap('heron at dawn', 13, 2)).toEqual(['heron at dawn']);
    expect(wrap('heron at dawn', 8, 2)).toEqual(['heron at', 'dawn']);
    expect(wrap('heron_at_dawn.png', 10, 2)).toEqual(['heron_at_', 'dawn.png']);
    expect(wrap('', 10, 2)).toEqual([]);
  });

  it('gives up the gaps of a name before its letters', () => {
    expect(wrap('plate_12.painted.png', 10, 2)).toEqual(['plate_12.p', 'ainted.png']);
    expect(wrap('plate_12.painted.png', 14, 2)).toEqual(['plate_', '12.painted.png']);
  });

  it('keeps the end of a name, for that is where the numbers are', () => {
    const [line] = wrap('a-very-long-name-from-the-river-bank-0042.tif', 20, 1);
    expect(line).toMatch(/^a-very.*….*0042\.tif$/);
    expect([...line].length).toBeLessThanOrEqual(20);
  });

  it('never is wider than asked, loses nothing where lines are left, and never cuts a letter in two', () => {
    fc.assert(
      fc.property(
        fc.string({ unit: 'grapheme', maxLength: 60 }),
        fc.integer({ min: 3, max: 40 }),
        (text, letters) => {
          const lines = wrap(text, letters, 100);
          for (const line of lines) expect([...line].length).toBeLessThanOrEqual(letters);
          const bare = (words: string) => words.replaceAll(/[\s·]/gu, '');
          expect(bare(lines.join(''))).toBe(bare(text));
          expect(wrap(text, letters, 2).length).toBeLessThanOrEqual(2);
        },
      ),
      { seed: 7 },
    );
  });
});

/** What every sheet must hold to, whatever is on it. */
function expectSound(pages: ProofPage[], frames: readonly ProofFrame[], { marginMm }: ProofSettings) {
  const marginPt = (marginMm / 25.4) * 72;
  expect(pages.flatMap((page) => page.pictures.map((picture) => picture.frame))).toEqual(
    frames.flatMap((each, k) => (each.sizePx ? [k] : [])),
  );
  pages.forEach((page, k) => {
    expect(textsOf(page)).toContain(`${k + 1} / ${pages.length}`);
    for (const picture of page.pictures) {
      const { xPt, yPt, widthPt, heightPt } = picture;
      expect(xPt).toBeGreaterThanOrEqual(marginPt - 0.01);
      expect(xPt + widthPt).toBeLessThanOrEqual(page.widthPt - marginPt + 0.01);
      expect(yPt + heightPt).toBeLessThanOrEqual(page.heightPt - marginPt);
      expect(yPt).toBeGreaterThanOrEqual(marginPt);
      const { widthPx, heightPx } = frames[picture.frame].sizePx!;
      expect(widthPx / (widthPt / 72)).toBeGreaterThanOrEqual(200 - 1e-9);
      expect(heightPx / (heightPt / 72)).toBeGreaterThanOrEqual(200 - 1e-9);
      // The shape is kept to a hundredth of a point on either edge.
      expect(Math.abs(widthPt / widthPx - heightPt / heightPx) * Math.min(widthPx, heightPx)).toBeLessThan(
        0.02,
      );
    }
    for (const { text, xPt, baselinePt, style } of page.texts) {
      expect(xPt + evenType.widthPt(text, style)).toBeLessThanOrEqual(page.widthPt - marginPt + 0.01);
      expect(baselinePt).toBeLessThanOrEqual(page.heightPt - marginPt + 0.01);
      const covering = page.pictures.filter(
        (picture) =>
          xPt < picture.xPt + picture.widthPt - 0.01 &&
          xPt + evenType.widthPt(text, style) > picture.xPt + 0.01 &&
          baselinePt > picture.yPt &&
          baselinePt - styleTable[style].sizePt * 0.7 < picture.yPt + picture.heightPt,
      );
      expect(covering, text).toEqual([]);
    }
    page.pictures.forEach((one, at) => {
      for (const other of page.pictures.slice(at + 1)) {
        const apart =
          one.xPt + one.widthPt <= other.xPt ||
          other.xPt + other.widthPt <= one.xPt ||
          one.yPt + one.heightPt <= other.yPt ||
          other.yPt + other.heightPt <= one.yPt;
        expect(apart).toBe(true);
      }
    });
  });
}

describe('a sheet', () => {
  it('of one frame is one page with title, date, caption and number', () => {
    const frames = [frame(6000, 4000)];
    const pages = layProof(frames, settings(), evenType);
    expectSound(pages, frames, settings());
    expect(pages).toHaveLength(1);
    expect(textsOf(pages[0])).toEqual(
      expect.arrayContaining([
        'The Ferry at Low Water',
        '1 frame',
        '1 December 2026',
        'plate.png',
        'Low Water · III',
        '6000 × 4000 px',
        '1 / 1',
      ]),
    );
  });

  it('of no frame is still a page', () => {
    expect(layProof([], settings(), evenType)).toHaveLength(1);
  });

  it('gives upright and lying pictures of one shape the same area, standing on one line', () => {
    const [page] = layProof([frame(6000, 4000), frame(4000, 6000)], settings(), evenType);
    const [lyingOne, upright] = page.pictures;
    expect(upright.widthPt * upright.heightPt).toBeCloseTo(lyingOne.widthPt * lyingOne.heightPt, -1);
    expect(upright.yPt + upright.heightPt).toBeCloseTo(lyingOne.yPt + lyingOne.heightPt, 6);
  });

  it('prints a small picture small instead of enlarging it', () => {
    const [page] = layProof([frame(300, 200)], settings({ columns: 1 }), evenType);
    expect(page.pictures[0].widthPt).toBeCloseTo((300 / 200) * 72, 1);
  });

  it('says in the place of a broken frame what is wrong with it, and goes on', () => {
    const broken: ProofFrame = {
      ...frame(1, 1, 'torn.jpg'),
      sizePx: null,
      fault: 'Cannot be shown: is empty',
    };
    const [page] = layProof([frame(900, 600), broken, frame(900, 600)], settings(), evenType);
    expect(page.boxes).toHaveLength(1);
    expect(textsOf(page)).toEqual(expect.arrayContaining(['Cannot be shown: is empty', 'torn.jpg']));
    expect(page.pictures.map((picture) => picture.frame)).toEqual([0, 2]);
  });

  it('holds on any paper, with any columns and margins, for any mixture of frames', () => {
    const anyFrame = fc
      .tuple(fc.integer({ min: 1, max: 20_000 }), fc.integer({ min: 1, max: 20_000 }), fc.string())
      .map(([widthPx, heightPx, name]) => frame(widthPx, heightPx, name));
    const anyPaper = fc
      .constantFrom(...Object.values(papers))
      .chain((paper) => fc.constantFrom(paper, lying(paper)));
    fc.assert(
      fc.property(
        fc.array(anyFrame, { maxLength: 40 }),
        anyPaper,
        fc.integer({ min: 1, max: 4 }),
        fc.integer({ min: 5, max: 20 }),
        fc.string({ maxLength: 120 }),
        (frames, paper, columns, marginMm, title) => {
          const asked = settings({ paper, columns, marginMm, title });
          expectSound(layProof(frames, asked, evenType), frames, asked);
        },
      ),
      { seed: 11, numRuns: 150 },
    );
  });

  it('of 200 frames keeps them all, in order', () => {
    const frames = Array.from({ length: 200 }, (_, k) =>
      k % 3 === 1 ? frame(4000, 6000, `plate ${k}.png`) : frame(6000, 4000, `plate ${k}.png`),
    );
    const pages = layProof(frames, settings({ columns: 4 }), evenType);
    expectSound(pages, frames, settings());
    const names = pages.flatMap(textsOf).filter((text) => text.startsWith('plate '));
    expect(names).toEqual(frames.map(({ caption }) => caption.name));
  });

  it('refuses columns and margins that leave no room', () => {
    expect(() => layProof([frame(9, 9)], settings({ columns: 20 }), evenType)).toThrow(/at most 8 columns/);
    const narrow = settings({ paper: { widthMm: 300, heightMm: 100 } });
    expect(() => layProof([frame(9, 9)], narrow, evenType)).toThrow(/margins that leave room/);
  });
});

describe('trim marks', () => {
  const frames = [frame(3000, 2000), frame(2000, 3000), frame(3000, 3000), frame(4000, 1000)];
  const [page] = layProof(frames, settings({ trimMarks: true }), evenType);

  it('stand in line with the edges of each picture, eight of them, and outside of it', () => {
    expect(page.marks).toHaveLength(8 * frames.length);
    for (const [k, { xPt, yPt, widthPt, heightPt }] of page.pictures.entries())
      for (const mark of page.marks.slice(8 * k, 8 * k + 8)) {
        const isLevel = mark.yPt === mark.toYPt;
        const along = isLevel ? [mark.xPt, mark.toXPt] : [mark.yPt, mark.toYPt];
        const [from, to] = isLevel ? [xPt, xPt + widthPt] : [yPt, yPt + heightPt];
        expect(along.every((at) => at < from) || along.every((at) => at > to)).toBe(true);
        const edges = isLevel ? [yPt, yPt + heightPt] : [xPt, xPt + widthPt];
        expect(edges).toContain(isLevel ? mark.yPt : mark.xPt);
      }
  });

  it('meet no caption and no other picture', () => {
    const lowest = page.marks.map(({ yPt, toYPt }) => Math.max(yPt, toYPt));
    for (const { text, baselinePt, style } of page.texts) {
      const above = lowest.filter(
        (atPt) => atPt < baselinePt && atPt > baselinePt - styleTable[style].sizePt,
      );
      expect(above, text).toEqual([]);
    }
    for (const { xPt, yPt, widthPt, heightPt } of page.pictures)
      for (const { toXPt, toYPt } of page.marks) {
        const isInside = toXPt > xPt && toXPt < xPt + widthPt && toYPt > yPt && toYPt < yPt + heightPt;
        expect(isInside).toBe(false);
      }
  });

  it('are only there where they are asked for', () => {
    expect(layProof(frames, settings(), evenType)[0].marks).toEqual([]);
  });
});
