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
import { framesBetween, type HungFrame, hangFrames, nearestFirst, type WallLayout } from './wallLayout.ts';
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
  const sizes = useSizes(series);
  const layout = useMemo(
    () => hangFrames(sizes, { widthPx: Math.max(widthPx, longEdgePx + 80), longEdgePx }),
    [sizes, widthPx, longEdgePx],
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
  const atIndex = series.frames.findIndex(({ frameId }) => frameId === at);
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
        {hungWith(layout, shown, atIndex).map((place) => {
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

/** Sizes of the frames; the same array until one of them changes, so that what is told of frames hangs nothing anew. */
function useSizes({ frames }: SeriesView): readonly { widthPx: number; heightPx: number }[] {
  const last = useRef<SeriesView['frames']>(frames);
  const isSame =
    frames.length === last.current.length &&
    frames.every(
      ({ widthPx, heightPx }, i) =>
        widthPx === last.current[i].widthPx && heightPx === last.current[i].heightPx,
    );
  if (!isSame) last.current = frames;
  return last.current;
}

/** The frames in view, and the one the keys are on wherever it hangs: taken down, it would lose the focus. */
function hungWith({ frames }: WallLayout, { from, to }: { from: number; to: number }, atIndex: number) {
  const hung = frames.slice(from, to);
  if (atIndex >= to && atIndex < frames.length) hung.push(frames[atIndex]);
  else if (atIndex >= 0 && atIndex < from) hung.unshift(frames[atIndex]);
  return hung;
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

/**
 * The frame that the keys go to is brought into view and takes the focus, if the focus is among the frames. Where
 * frames are hung anew it stays in view if it was; whoever scrolled away from it is left in peace.
 */
function useFollowedKeys(
  scroller: React.RefObject<HTMLElement | null>,
  layout: WallLayout,
  series: SeriesView,
): void {
  const at = useStore(chosenStore, (chosen) => chosen.at);
  const frames = useRef(series.frames);
  frames.current = series.frames;
  const last = useRef({ at, layout });
  const hadFocus = useRef(false);
  const isPressed = usePress(scroller);
  useEffect(() => {
    const note = ({ target }: FocusEvent) => {
      hadFocus.current = scroller.current?.contains(target as Node) ?? false;
    };
    document.addEventListener('focusin', note);
    return () => document.removeEventListener('focusin', note);
  }, [scroller]);
  useEffect(() => {
    const before = last.current;
    last.current = { at, layout };
    const element = scroller.current!;
    // A frame that is taken down as the keys leave it leaves the focus to nobody.
    const isLost = document.activeElement === document.body && hadFocus.current;
    if (!at || !(isLost || element.contains(document.activeElement))) return;
    const index = frames.current.findIndex(({ frameId }) => frameId === at);
    const place = layout.frames[index];
    if (!place) return;
    const { scrollTop, clientHeight } = element;
    const isIn = ({ yPx, heightPx }: HungFrame) =>
      yPx + heightPx > scrollTop && yPx < scrollTop + clientHeight;
    const was = before.layout.frames[index];
    if (before.at === at && before.layout !== layout && !(was && isIn(was))) return;
    // What the pointer presses is in view; moved away from under it, the click would be lost.
    if (isPressed.current) return;
    if (place.yPx - 40 < scrollTop) element.scrollTop = place.yPx - 40;
    else if (place.yPx + place.heightPx + 80 > scrollTop + clientHeight)
      element.scrollTop = place.yPx + place.heightPx + 80 - clientHeight;
    element.querySelector<HTMLElement>(`[data-frame="${CSS.escape(at)}"]`)?.focus({ preventScroll: true });
  }, [at, layout, scroller, isPressed]);
}

/** Whether the pointer is pressed on the wall. */
function usePress(scroller: React.RefObject<HTMLElement | null>): React.RefObject<boolean> {
  const isPressed = useRef(false);
  useEffect(() => {
    const press = ({ target }: Event) => {
      isPressed.current = scroller.current?.contains(target as Node) ?? false;
    };
    const release = () => {
      isPressed.current = false;
    };
    document.addEventListener('pointerdown', press, { capture: true });
    for (const name of ['pointerup', 'pointercancel']) document.addEventListener(name, release);
    return () => {
      document.removeEventListener('pointerdown', press, { capture: true });
      for (const name of ['pointerup', 'pointercancel']) document.removeEventListener(name, release);
    };
  }, [scroller]);
  return isPressed;
}
