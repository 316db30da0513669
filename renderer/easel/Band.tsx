import { type KeyboardEvent, type MouseEvent, type PointerEvent, useEffect, useRef } from 'react';
import { parameterTable, type Stratum } from '../../core/parameters/table.ts';
import { startDragGroup } from '../controls/dragGroup.ts';
import { ValueField } from '../controls/ValueField.tsx';
import { strengthFromPull } from '../geometry/sectionLayout.ts';
import {
  currentLook,
  type Look,
  resetParameter,
  setStrength,
  stratumName,
  strengthKey,
  strengthOf,
  toggleLifted,
} from '../state/lookStore.ts';
import { chooseStratum } from '../state/panelStore.ts';
import type { ChangeGroup } from '../state/undoHistory.ts';

interface BandProps {
  look: Look;
  stratum: Stratum;
  isChosen: boolean;
  topPx: number;
  thicknessPx: number;
  slotTopPx: number;
  slotHeightPx: number;
  leftPx: number;
  rightPx: number;
  fullPx: number;
}

const wheelRate = 0.0004;

/** One stratum's band: its name, an edge to pull, and its strength. The pixels are drawn beneath. */
export function Band(props: BandProps) {
  const { look, stratum, isChosen, topPx, thicknessPx, slotTopPx, slotHeightPx, leftPx, rightPx, fullPx } =
    props;
  const name = stratumName(stratum);
  const strength01 = strengthOf(look.parameters, stratum);
  const percent = Math.round(strength01 * 100);
  const isLifted = look.lifted[stratum] !== undefined;
  const body = useRef<HTMLButtonElement>(null);
  useBandWheel(body, stratum);
  const pull = useRef<{ y: number; strength01: number; group: ChangeGroup } | null>(null);

  const onPointerDown = (event: PointerEvent<HTMLElement>) => {
    event.currentTarget.setPointerCapture(event.pointerId);
    pull.current = { y: event.clientY, strength01, group: startDragGroup(`${name} strength`) };
  };
  const onPointerMove = (event: PointerEvent<HTMLElement>) => {
    if (!pull.current || !event.currentTarget.hasPointerCapture(event.pointerId)) return;
    const { y, strength01: start, group } = pull.current;
    setStrength(stratum, strengthFromPull(start, y - event.clientY, fullPx), group);
  };
  const onKeyDown = (event: KeyboardEvent) => {
    const next: Record<string, number> = {
      ArrowUp: strength01 + 0.01,
      ArrowRight: strength01 + 0.01,
      ArrowDown: strength01 - 0.01,
      ArrowLeft: strength01 - 0.01,
      PageUp: strength01 + 0.1,
      PageDown: strength01 - 0.1,
      Home: 0,
      End: 1,
    };
    if (event.key === 'Delete' || event.key === 'Backspace') resetParameter(strengthKey(stratum));
    else if (event.key in next) setStrength(stratum, next[event.key]);
    else return;
    event.preventDefault();
    event.stopPropagation();
  };
  const onName = (event: MouseEvent) => {
    if (event.shiftKey) toggleLifted(stratum);
    else chooseStratum(stratum);
  };
  const width = rightPx - leftPx;
  return (
    <div className={`band${isChosen ? ' band-chosen' : ''}${isLifted ? ' band-lifted' : ''}`}>
      <button
        type="button"
        className="band-name"
        style={{ top: `${slotTopPx}px`, height: `${slotHeightPx}px`, width: `${leftPx - 12}px` }}
        aria-label={isLifted ? `${name}, lifted` : name}
        aria-pressed={isChosen}
        title={`${name}: click for its controls; Shift and click to ${isLifted ? 'lay it down again' : 'lift it'}`}
        onClick={onName}
      >
        {name}
      </button>
      <button
        ref={body}
        type="button"
        className="band-body"
        tabIndex={-1}
        aria-label={`${name}: show its controls`}
        style={{ top: `${topPx}px`, left: `${leftPx}px`, width: `${width}px`, height: `${thicknessPx}px` }}
        onClick={onName}
      />
      <div
        className="band-edge"
        style={{ top: `${topPx}px`, left: `${leftPx}px`, width: `${width}px` }}
        role="slider"
        tabIndex={0}
        title={`${name}: pull the edge to change its strength; double click for the preset’s`}
        aria-label={`${name} strength`}
        aria-orientation="vertical"
        aria-valuemin={0}
        aria-valuemax={100}
        aria-valuenow={percent}
        aria-valuetext={`${percent} percent${isLifted ? ', lifted' : ''}`}
        onPointerDown={onPointerDown}
        onPointerMove={onPointerMove}
        onPointerUp={() => {
          pull.current = null;
        }}
        onDoubleClick={() => resetParameter(strengthKey(stratum))}
        onKeyDown={onKeyDown}
      >
        <span className="band-pull" aria-hidden="true" />
      </div>
      <span
        className="band-value"
        style={{ top: `${slotTopPx}px`, height: `${slotHeightPx}px`, left: `${rightPx + 12}px` }}
      >
        <ValueField
          label={`${name} strength, typed`}
          shown={`${percent} %`}
          onTyped={(text) => typeStrength(stratum, text)}
          onStep={(steps) => setStrength(stratum, strength01 + steps * 0.01)}
        />
      </span>
    </div>
  );
}

function typeStrength(stratum: Stratum, text: string): string | null {
  const percent = Number(text.replaceAll(/[\s\u202f%]/g, '').replace(',', '.'));
  const isGood = text.trim() !== '' && percent >= 0 && percent <= 100;
  if (!isGood) return `Takes 0 to 100 % for ${parameterTable[strengthKey(stratum)].label.toLowerCase()}.`;
  setStrength(stratum, percent / 100, null);
  return null;
}

/** Scrolling over a band changes its strength. */
function useBandWheel(body: React.RefObject<HTMLElement | null>, stratum: Stratum): void {
  useEffect(() => {
    const element = body.current;
    if (!element) return;
    let rest = 0;
    const onWheel = (event: WheelEvent) => {
      event.preventDefault();
      const look = currentLook();
      if (!look) return;
      rest -= event.deltaY * wheelRate;
      const steps = Math.trunc(rest * 100);
      if (steps === 0) return;
      rest -= steps / 100;
      setStrength(stratum, strengthOf(look.parameters, stratum) + steps / 100);
    };
    element.addEventListener('wheel', onWheel, { passive: false });
    return () => element.removeEventListener('wheel', onWheel);
  }, [body, stratum]);
}
