import { useEffect, useRef } from 'react';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { placeBandSpan, placeBands } from '../app/easelWork.ts';
import { fullThicknessPx } from '../geometry/sectionLayout.ts';
import { type Look, strataBottomUp } from '../state/lookStore.ts';
import { useStore } from '../state/store.ts';
import { changeView, placedViewStore, viewStore } from '../state/viewStore.ts';
import { Band } from './Band.tsx';
import { sectionMeasures } from './stageMeasures.ts';

interface SectionProps {
  photo: OpenedPhoto;
  look: Look;
  canvasHost: (element: HTMLDivElement | null) => void;
}

/** What each stratum holds along the cut, one band above the other, aligned with the picture. */
export function Section({ look, canvasHost }: SectionProps) {
  const bandsBox = useRef<HTMLDivElement>(null);
  const view = useStore(viewStore);
  const placed = useStore(placedViewStore);
  useEffect(() => {
    const element = bandsBox.current;
    if (!element) return;
    const measure = () => changeView({ sectionHeightPx: element.clientHeight });
    const observer = new ResizeObserver(measure);
    observer.observe(element);
    measure();
    return () => observer.disconnect();
  }, []);
  const ratio = view.devicePixelRatio;
  const measures = sectionMeasures(view.sectionHeightPx, ratio);
  const span = placed && view.stage.widthPx > 0 ? placeBandSpan(placed, view) : null;
  return (
    <section className="section" aria-label="Section along the cut">
      <div className="section-bands" ref={bandsBox}>
        <div className="section-canvas" ref={canvasHost} />
        {span &&
          placeBands(look, view)
            .toReversed()
            .map((place) => (
              <Band
                key={place.stratum}
                look={look}
                stratum={place.stratum}
                isChosen={view.chosen === place.stratum}
                topPx={place.topPx / ratio}
                thicknessPx={place.thicknessPx / ratio}
                slotTopPx={place.slotTopPx / ratio}
                slotHeightPx={place.slotHeightPx / ratio}
                leftPx={span.leftPx / ratio}
                rightPx={span.rightPx / ratio}
                fullPx={fullThicknessPx(strataBottomUp.length, measures) / ratio}
              />
            ))}
      </div>
    </section>
  );
}
