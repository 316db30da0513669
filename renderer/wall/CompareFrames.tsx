import { useEffect, useRef, useState } from 'react';
import type { SeriesSettings } from '../../core/series/seriesDocument.ts';
import type { SeriesView } from '../../main/host/api/seriesCommands.ts';
import { FramePicture } from './FramePicture.tsx';
import { pictureEdgeFor, pictureShelf } from './pictureShelf.ts';
import { comparedStore } from './wallStore.ts';

interface CompareProps {
  pair: readonly [string, string];
  series: SeriesView;
  settings: SeriesSettings;
}

const betweenPx = 36;
const captionPx = 72;

/** Two frames side by side at one print scale, as large as the wall allows. */
export function CompareFrames({ pair, series, settings }: CompareProps) {
  const ground = useRef<HTMLElement>(null);
  const [room, setRoom] = useState({ widthPx: 0, heightPx: 0 });
  const frames = pair.flatMap((id) => series.frames.filter(({ frameId }) => frameId === id));
  useEffect(() => {
    const element = ground.current!;
    const watcher = new ResizeObserver(() =>
      setRoom({ widthPx: element.clientWidth - 64, heightPx: element.clientHeight - 48 }),
    );
    watcher.observe(element);
    return () => watcher.disconnect();
  }, []);
  const shapes = frames.map(({ widthPx, heightPx }) => {
    const long = Math.max(1, widthPx, heightPx);
    return { width: widthPx / long, height: heightPx / long };
  });
  const across = shapes.reduce((sum, { width }) => sum + width, 0) || 1;
  const tallest = Math.max(0.01, ...shapes.map(({ height }) => height));
  const longEdgePx = Math.max(
    0,
    Math.min((room.widthPx - betweenPx) / across, (room.heightPx - captionPx) / tallest),
  );
  useEffect(() => {
    if (longEdgePx > 0) pictureShelf.want(frames, pictureEdgeFor(longEdgePx, window.devicePixelRatio));
  });
  return (
    <section ref={ground} className="wall-ground wall-compare" aria-label="Two frames compared">
      <div className="compared" style={{ gap: betweenPx }}>
        {frames.map(({ frameId, odd }, index) => (
          <figure key={frameId}>
            <div
              className="wall-print"
              role="img"
              aria-label={frameId}
              style={{
                width: shapes[index].width * longEdgePx,
                height: shapes[index].height * longEdgePx,
              }}
            >
              <FramePicture frameId={frameId} />
            </div>
            <figcaption>
              <span className="wall-name">
                {frameId.replace(/\.[^.]+$/, '')}
                {frameId === settings.lead && <em> the lead</em>}
              </span>
              {odd && !odd.isMatched && <span className="wall-note wall-odd">{odd.reason}</span>}
            </figcaption>
          </figure>
        ))}
      </div>
      <button
        type="button"
        className="quiet-button"
        title="Escape"
        ref={(element) => element?.focus()}
        onClick={() => comparedStore.set(null)}
      >
        Back to the wall
      </button>
    </section>
  );
}
