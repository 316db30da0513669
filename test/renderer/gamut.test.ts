import { describe, expect, it } from 'vitest';
import { shareInside } from '../../renderer/compositing/shareInside.ts';
import { gamutSentence } from '../../renderer/print/gamutWords.ts';

describe('the share of a picture that a print cannot show', () => {
  /** 8 × 6 pixels of a level four times smaller than the photo, of which the left three columns are marked. */
  const region = { xPx: 0, yPx: 0, widthPx: 8, heightPx: 6 };
  const marks = Uint8Array.from({ length: 48 }, (_, i) => (i % 8 < 3 ? 1 : 0));
  const photo = { xPx: 0, yPx: 0, widthPx: 32, heightPx: 24 };

  it('counts the whole picture where all of it is printed', () => {
    expect(shareInside(marks, region, 2, photo)).toBe(3 / 8);
  });

  it('counts only what the crop leaves', () => {
    expect(shareInside(marks, region, 2, { xPx: 8, yPx: 4, widthPx: 16, heightPx: 12 })).toBe(1 / 4);
    expect(shareInside(marks, region, 2, { xPx: 16, yPx: 0, widthPx: 16, heightPx: 24 })).toBe(0);
  });

  it('knows where a part of the picture lies', () => {
    const part = { xPx: 100, yPx: 50, widthPx: 8, heightPx: 6 };
    expect(shareInside(marks, part, 0, { xPx: 102, yPx: 50, widthPx: 2, heightPx: 6 })).toBe(1 / 2);
    expect(shareInside(marks, part, 0, { xPx: 0, yPx: 0, widthPx: 50, heightPx: 50 })).toBe(0);
  });
});

describe('its words', () => {
  it.each([
    [0, 'Every colour of the picture lies within this paper'],
    [0.00001, 'Less than 0.1 % of the picture is more saturated than this paper'],
    [0.0312, '3.1 % of the picture is more saturated than this paper'],
    [0.03, '3 % of the picture is more saturated than this paper'],
    [0.0996, '10 % of the picture is more saturated than this paper'],
    [0.534, '53 % of the picture is more saturated than this paper'],
    [0.9999, 'More than 99 % of the picture is more saturated than this paper'],
    [1, 'All of the picture is more saturated than this paper'],
  ])('say %d in a sentence', (share01, sentence) => {
    expect(gamutSentence(share01, { file: '/colours/uncoated.icc' })).toBe(sentence);
  });

  it('name the space where the file is for screens', () => {
    expect(gamutSentence(0.03, 'srgb')).toBe('3 % of the picture is more saturated than sRGB');
    expect(gamutSentence(0, 'p3')).toBe('Every colour of the picture lies within Display P3');
  });
});
