import type { PlacedMark, RectPt } from './proofPage.ts';

/** Between the cut and the mark, so that none is left on the print: a bleed's worth at a proof's scale. */
const gapPt = 2.5;
const lengthPt = 7;

/** How far marks reach beyond a picture. */
export const marksReachPt = gapPt + lengthPt;

/** Two marks at each corner of a picture, in line with its edges and outside of it. */
export function trimMarksOf({ xPt, yPt, widthPt, heightPt }: RectPt): PlacedMark[] {
  const marks: PlacedMark[] = [];
  for (const [cornerX, outX] of [
    [xPt, -1],
    [xPt + widthPt, 1],
  ])
    for (const [cornerY, outY] of [
      [yPt, -1],
      [yPt + heightPt, 1],
    ]) {
      const [fromX, toX] = [cornerX + outX * gapPt, cornerX + outX * marksReachPt];
      const [fromY, toY] = [cornerY + outY * gapPt, cornerY + outY * marksReachPt];
      marks.push({ xPt: fromX, yPt: cornerY, toXPt: toX, toYPt: cornerY });
      marks.push({ xPt: cornerX, yPt: fromY, toXPt: cornerX, toYPt: toY });
    }
  return marks;
}
