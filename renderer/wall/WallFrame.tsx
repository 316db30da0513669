import { memo } from 'react';
import type { FrameOverride } from '../../core/series/seriesDocument.ts';
import type { RunFrame } from '../../main/host/api/runCommands.ts';
import type { FrameView } from '../../main/host/api/seriesCommands.ts';
import { choose } from './choosing.ts';
import { FramePicture } from './FramePicture.tsx';
import { type HungFrame, wallSpacing } from './wallLayout.ts';
import { applyRemedy, dropOverrides, leaveOut, openOnEasel, remedyWords } from './wallWork.ts';

interface WallFrameProps {
  frame: FrameView;
  place: HungFrame;
  count: number;
  isLead: boolean;
  isLeftOut: boolean;
  isChosen: boolean;
  /** The Tab key comes here. */
  isAt: boolean;
  override: FrameOverride | null;
  /** Title and numeral of a look of its own. */
  ownLook: string | null;
  run: RunFrame | null;
}

/** One frame, pinned up: its picture, its name, and what is to be said of it. */
export const WallFrame = memo(function WallFrame(props: WallFrameProps) {
  const { frame, place, count, isLead, isLeftOut, isChosen, isAt, run } = props;
  const { frameId } = frame;
  const isOdd = frame.odd !== null && !frame.odd.isMatched && !isLeftOut;
  const width = Math.max(place.widthPx, wallSpacing.leastWidthPx);
  const names = [
    'wall-frame',
    isLead && 'is-lead',
    isLeftOut && 'is-out',
    isChosen && 'is-chosen',
    isOdd && 'is-odd',
  ];
  return (
    <li
      className={names.filter(Boolean).join(' ')}
      style={{ transform: `translate(${place.xPx}px, ${place.yPx}px)`, width }}
      aria-setsize={count}
      aria-posinset={place.index + 1}
    >
      <button
        type="button"
        className="wall-print"
        style={{ width: place.widthPx, height: place.heightPx }}
        data-frame={frameId}
        tabIndex={isAt ? 0 : -1}
        aria-pressed={isChosen}
        aria-label={nameInWords(props)}
        title={frame.message ?? `${frameId}: double click for the easel`}
        onClick={({ ctrlKey, metaKey, shiftKey, detail }) => {
          // A press of Space or Enter on a button is a click of detail 0: the wall's own keys see to those.
          if (detail === 0) return;
          choose(frameId, shiftKey ? 'stretch' : ctrlKey || metaKey ? 'toggle' : 'alone');
        }}
        onDoubleClick={() => void openOnEasel(frameId)}
        onFocus={() => choose(frameId, 'walk')}
      >
        {frame.state === 'unreadable' ? (
          <span className="wall-unreadable">cannot be read</span>
        ) : (
          <FramePicture frameId={frameId} />
        )}
        {run?.state === 'painting' && (
          <span className="wall-run" style={{ transform: `scaleX(${run.fraction01})` }} />
        )}
      </button>
      {isOdd && <Thread heightPx={place.heightPx} />}
      <span className="wall-pin" style={{ left: place.widthPx / 2 }} aria-hidden="true" />
      <Caption {...props} isOdd={isOdd} />
    </li>
  );
});

/** From the odd frame's corner, down beside it to the words that say why. */
function Thread({ heightPx }: { heightPx: number }) {
  const end = heightPx + 72;
  return (
    <svg className="wall-thread" width={20} height={end} viewBox={`-12 0 20 ${end}`} aria-hidden="true">
      <path
        d={`M 7 8 C -3 ${heightPx * 0.12}, -13 ${heightPx * 0.3}, -9 ${heightPx * 0.55} S -4 ${heightPx * 0.9}, -8 ${heightPx + 12} S -9 ${heightPx + 44}, -5 ${end}`}
      />
      <circle cx={7} cy={8} r={4} />
    </svg>
  );
}

function Caption({
  frame,
  isLead,
  isLeftOut,
  isOdd,
  override,
  ownLook,
  run,
}: WallFrameProps & { isOdd: boolean }) {
  const { frameId, odd } = frame;
  const remedy = odd?.remedies[0];
  return (
    <div className="wall-caption">
      <span className="wall-name">
        <bdi>{frameId.replace(/\.[^.]+$/, '')}</bdi>
        {isLead && <em> the lead</em>}
        {runWords(run)}
      </span>
      {isLeftOut ? (
        <span className="wall-note">
          left out
          <button type="button" tabIndex={-1} onClick={() => leaveOut([frameId], false)}>
            Take back<span className="unseen"> {frameId}</span>
          </button>
        </span>
      ) : frame.state === 'unreadable' ? (
        <span className="wall-note wall-fault">{frame.message}</span>
      ) : isOdd && odd ? (
        <span className="wall-note wall-odd">
          {odd.reason}
          {remedy && (
            <button type="button" tabIndex={-1} onClick={() => applyRemedy(remedy, frameId)}>
              {remedyWords[remedy]}
              <span className="unseen">: {frameId}</span>
            </button>
          )}
        </span>
      ) : override ? (
        <span className="wall-note">
          {ownLook ?? 'matched in its own way'}
          <button
            type="button"
            tabIndex={-1}
            title="As the rest of the series"
            onClick={() => dropOverrides([frameId])}
          >
            Drop<span className="unseen"> what {frameId} has of its own</span>
          </button>
        </span>
      ) : null}
    </div>
  );
}

function runWords(run: RunFrame | null) {
  if (!run) return null;
  const words = {
    waiting: '',
    painting: `${Math.round(run.fraction01 * 100)} %`,
    painted: 'painted',
    kept: 'painted before',
    failed: 'not painted',
  }[run.state];
  return (
    words && (
      <span className={`wall-run-word is-${run.state}`} title={run.message || undefined}>
        {words}
      </span>
    )
  );
}

function nameInWords({ frame, isLead, isLeftOut, override, ownLook }: WallFrameProps): string {
  const parts = [frame.frameId];
  if (isLead) parts.push('the lead');
  if (isLeftOut) parts.push('left out');
  if (frame.state === 'unreadable') parts.push('cannot be read');
  if (override) parts.push(ownLook ?? 'matched in its own way');
  if (frame.odd && !isLeftOut) parts.push(frame.odd.reason);
  return parts.join(', ');
}
