import { useEffect, useState } from 'react';
import type { Parameters } from '../../core/parameters/table.ts';
import { host } from '../host/host.ts';

const longEdgePx = 360;
/** Somebody who is pulling at a control wants no picture of every value. */
const pauseMs = 500;

/** The whole painting, small, for the drawing of the sheet; the last one until the next is painted. */
export function usePrintPicture(
  photoId: string,
  parameters: Parameters,
  printLongEdgeMm: number,
): ImageData | null {
  const [painted, setPainted] = useState<{ photoId: string; picture: ImageData } | null>(null);
  const isFirst = painted?.photoId !== photoId;
  useEffect(() => {
    const abort = new AbortController();
    const order = { photoId, parameters, longEdgePx, view: 'print', printLongEdgeMm };
    const timer = setTimeout(
      () => {
        host.callForFrame('paintSmallPicture', order, { signal: abort.signal }).then(
          ({ header, planes }) => {
            const pixels = new Uint8ClampedArray(planes.rgba as Uint8Array);
            const picture = new ImageData(pixels, header.widthPx, header.heightPx);
            if (!abort.signal.aborted) setPainted({ photoId, picture });
          },
          // A sheet without its picture still has its edges.
          () => undefined,
        );
      },
      isFirst ? 0 : pauseMs,
    );
    return () => {
      clearTimeout(timer);
      abort.abort();
    };
  }, [photoId, parameters, printLongEdgeMm, isFirst]);
  return painted?.photoId === photoId ? painted.picture : null;
}
