import { useEffect, useLayoutEffect, useMemo, useRef, useState } from 'react';
import type { SeriesSettings } from '../../core/series/seriesDocument.ts';
import type { SeriesView } from '../../main/host/api/seriesCommands.ts';
import { sessionStore } from '../state/photoStore.ts';
import { useStore } from '../state/store.ts';
import { CompareFrames } from './CompareFrames.tsx';
import { chooseNone } from './choosing.ts';
import { lookWords } from './lookWords.ts';
import { pictureEdgeFor, pictureShelf } from './pictureShelf.ts';
import { runStore } from './runWork.ts';
import { WallFrame } from './WallFrame.tsx';
import { WallPanel } from './WallPanel.tsx';
import { takeWallKey } from './wallKeys.ts';
import { framesBetween, hangFrames, nearestFirst, type WallLayout } from './wallLayout.ts';
import { chosenStore, comparedStore, wallScaleStore } from './wallStore.ts';

/** Rows above and below the view that are hung as well, as a share of its height. */
const spare = 0.6;

/** The whole series, pinned up at one print scale. */
export function Wall({ series, settings }: { series: SeriesView; settings: SeriesSettings }) {
  const compared = useStore(comparedStore);
  return (
    <main className="wall">
      {compared ? (
        <CompareFrames pair={compared} series={series} settings={settings} />
      ) : (
        <Frames series={series} settings={settings} />
      )}
      <WallPanel series={series} settings={settings} />
    </main>
  );
}

function Frames({ series, settings }: { series: SeriesView; settings: SeriesSettings }) {
  const scroller = useRef<HTMLElement>(null);
  const longEdgePx = useStore(wallScaleStore);
  const chosen = useStore(chosenStore);
  const run = useStore(runStore);
  const presets = useStore(sessionStore, (session) => session?.presets);
  const [widthPx, setWidthPx] = useState(0);
  const layout = useMemo(
    () => hangFrames(series.frames, { widthPx: Math.max(widthPx, longEdgePx + 80), longEdgePx }),
    [series.frames, widthPx, longEdgePx],
  );
  const shown = useShown(scroller, layout, setWidthPx);
  useWantedPictures(series, settings, layout, shown, scroller, longEdgePx);
  useFollowedKeys(scroller, layout, series);
  const leftOut = useMemo(() => new Set(settings.leftOut), [settings.leftOut]);
  const overrides = useMemo(
    () =>
      new Map(
        settings.overrides.flatMap(({ frames, override }) =>
          frames.map((frame) => [frame, override] as const),
        ),
      ),
    [settings.overrides],
  );
  const at = chosen.at ?? series.frames[0]?.frameId;
  return (
    <section
      ref={scroller}
      className="wall-ground"
      aria-label="Frames"
      // biome-ignore lint/a11y/noNoninteractiveTabindex: a page that scrolls must be scrollable by keys
      tabIndex={0}
      onKeyDown={(event) => takeWallKey(event, layout)}
      onMouseDown={(event) => {
        if (event.target === event.currentTarget || (event.target as Element).tagName === 'UL') chooseNone();
      }}
    >
      <ul style={{ height: layout.heightPx }}>
        {layout.frames.slice(shown.from, shown.to).map((place) => {
          const frame = series.frames[place.index];
          const override = overrides.get(frame.frameId) ?? null;
          return (
            <WallFrame
              key={frame.frameId}
              frame={frame}
              place={place}
              count={series.frames.length}
              isLead={frame.frameId === settings.lead}
              isLeftOut={leftOut.has(frame.frameId)}
              isChosen={chosen.frameIds.has(frame.frameId)}
              isAt={frame.frameId === at}
              override={override}
              ownLook={override?.look ? lookWords(override.look, presets ?? []) : null}
              run={run?.frames[frame.frameId] ?? null}
            />
          );
        })}
      </ul>
    </section>
  );
}

/** Which frames are hung: those in view and a little around; changes only when a row comes or goes. */
function useShown(
  scroller: React.RefObject<HTMLElement | null>,
  layout: WallLayout,
  setWidthPx: (widthPx: number) => void,
) {
  const [shown, setShown] = useState({ from: 0, to: 0 });
  useLayoutEffect(() => {
    const element = scroller.current!;
    const look = () => {
      setWidthPx(element.clientWidth);
      const { scrollTop, clientHeight } = element;
      const next = framesBetween(
        layout,
        scrollTop - spare * clientHeight,
        scrollTop + (1 + spare) * clientHeight,
      );
      setShown((last) => (last.from === next.from && last.to === next.to ? last : next));
    };
    look();
    const watcher = new ResizeObserver(look);
    watcher.observe(element);
    element.addEventListener('scroll', look, { passive: true });
    return () => {
      watcher.disconnect();
      element.removeEventListener('scroll', look);
    };
  }, [layout, scroller, setWidthPx]);
  return shown;
}

/** Asks for the pictures of the frames in view, nearest first, once scrolling leaves them there. */
function useWantedPictures(
  series: SeriesView,
  settings: SeriesSettings,
  layout: WallLayout,
  shown: { from: number; to: number },
  scroller: React.RefObject<HTMLElement | null>,
  longEdgePx: number,
): void {
  useEffect(() => {
    const { scrollTop, clientHeight } = scroller.current!;
    const view = framesBetween(layout, scrollTop, scrollTop + clientHeight);
    const out = new Set(settings.leftOut);
    const isWanted = (index: number) => {
      const { widthPx, state, frameId } = series.frames[index];
      return widthPx > 0 && state !== 'unreadable' && (!out.has(frameId) || shown.to > 0);
    };
    const wanted = nearestFirst(layout, view, scrollTop + clientHeight / 2).filter(isWanted);
    pictureShelf.want(
      wanted.map((index) => series.frames[index]),
      pictureEdgeFor(longEdgePx, window.devicePixelRatio),
    );
  }, [series.frames, settings.leftOut, layout, shown, scroller, longEdgePx]);
}

/** The frame that the keys go to is brought into view and takes the focus, if the focus is among the frames. */
function useFollowedKeys(
  scroller: React.RefObject<HTMLElement | null>,
  layout: WallLayout,
  series: SeriesView,
): void {
  const at = useStore(chosenStore, (chosen) => chosen.at);
  const frames = useRef(series.frames);
  frames.current = series.frames;
  useEffect(() => {
    const element = scroller.current!;
    if (!at || !element.contains(document.activeElement)) return;
    const place = layout.frames[frames.current.findIndex(({ frameId }) => frameId === at)];
    if (!place) return;
    const { scrollTop, clientHeight } = element;
    if (place.yPx - 40 < scrollTop) element.scrollTop = place.yPx - 40;
    else if (place.yPx + place.heightPx + 80 > scrollTop + clientHeight)
      element.scrollTop = place.yPx + place.heightPx + 80 - clientHeight;
    const focus = () =>
      element.querySelector<HTMLElement>(`[data-frame="${CSS.escape(at)}"]`)?.focus({ preventScroll: true });
    // A row that was far away is hung with the next picture of the window.
    focus();
    const waiting = requestAnimationFrame(() => requestAnimationFrame(focus));
    return () => cancelAnimationFrame(waiting);
  }, [at, layout, scroller]);
}
