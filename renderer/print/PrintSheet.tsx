import { useEffect, useRef } from 'react';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import type { Look } from '../state/lookStore.ts';
import { useStore } from '../state/store.ts';
import { viewStore } from '../state/viewStore.ts';
import { drawSheet, fitSheet } from './drawSheet.ts';
import { inInches, inMm, type PlannedPrint, wholeLongEdgeMm } from './printMeasures.ts';
import { aroundInWords, pixelsInWords } from './printWords.ts';
import { usePrintPicture } from './usePrintPicture.ts';

interface PrintSheetProps {
  photo: OpenedPhoto;
  look: Look;
  output: OutputSettings;
  plan: PlannedPrint;
}

/** The sheet as it will come out of the press, to scale, with what it measures. */
export function PrintSheet({ photo, look, output, plan }: PrintSheetProps) {
  const canvas = useRef<HTMLCanvasElement>(null);
  const ratio = useStore(viewStore, (view) => view.devicePixelRatio);
  const picture = usePrintPicture(photo.photoId, look.parameters, wholeLongEdgeMm(photo, output));
  useEffect(() => {
    const element = canvas.current;
    const context = element?.getContext('2d');
    if (!element || !context) return;
    element.width = Math.round(element.clientWidth * ratio);
    element.height = Math.round(element.clientHeight * ratio);
    const room = { widthPx: element.width, heightPx: element.height };
    const { crop } = plan;
    const crop01 = {
      x: crop.xPx / photo.widthPx,
      y: crop.yPx / photo.heightPx,
      width: crop.widthPx / photo.widthPx,
      height: crop.heightPx / photo.heightPx,
    };
    const style = getComputedStyle(element);
    const colour = (name: string) => style.getPropertyValue(name).trim();
    const colours = {
      paper: '#ffffff',
      edge: colour('--rule-strong'),
      paint: colour('--paper-deep'),
      cut: '#ffffff',
      mark: colour('--ink'),
    };
    drawSheet(
      context,
      fitSheet(plan, room),
      plan,
      crop01,
      picture && drawable(picture),
      colours,
      Math.max(1, Math.round(ratio)),
    );
  }, [plan, photo, picture, ratio]);
  return (
    <figure className="print-sheet">
      <canvas ref={canvas} role="img" aria-label="The sheet, drawn to scale" />
      <figcaption>
        <span className="print-size">
          {inMm(plan.widthMm)} × {inMm(plan.heightMm)} mm
        </span>
        <span>
          {inInches(plan.widthMm)} × {inInches(plan.heightMm)} in
        </span>
        <span>
          {pixelsInWords(plan.fileWidthPx, plan.fileHeightPx)}
          {aroundInWords(output)}
        </span>
      </figcaption>
    </figure>
  );
}

function drawable(picture: ImageData): OffscreenCanvas {
  const held = new OffscreenCanvas(picture.width, picture.height);
  held.getContext('2d')?.putImageData(picture, 0, 0);
  return held;
}
