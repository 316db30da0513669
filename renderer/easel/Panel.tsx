import { type KeyboardEvent, useRef } from 'react';
import type { Stratum } from '../../core/parameters/table.ts';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { StratumControls } from '../controls/StratumControls.tsx';
import { PresetChooser } from '../presets/PresetChooser.tsx';
import { PrintPage } from '../print/PrintPage.tsx';
import { type Look, strataBottomUp, stratumName } from '../state/lookStore.ts';
import { chooseStratum, panelStore } from '../state/panelStore.ts';
import { useStore } from '../state/store.ts';
import { viewStore } from '../state/viewStore.ts';

type Page = 'presets' | Stratum | 'print';

/** At the right: the presets, the chosen stratum's controls, or the print. */
export function Panel({ photo, look }: { photo: OpenedPhoto; look: Look }) {
  const page = useStore(panelStore);
  const chosen = useStore(viewStore, (view) => view.chosen);
  const open: Page = page === 'stratum' ? chosen : page;
  const tabs = useRef<HTMLDivElement>(null);
  const pages: readonly Page[] = ['presets', ...strataBottomUp.toReversed(), 'print'];
  const show = (next: Page) =>
    next === 'presets' || next === 'print' ? panelStore.set(next) : chooseStratum(next);
  const onKeyDown = (event: KeyboardEvent) => {
    const step = { ArrowRight: 1, ArrowLeft: -1 }[event.key];
    if (!step) return;
    const index = (pages.indexOf(open) + step + pages.length) % pages.length;
    show(pages[index]);
    tabs.current?.querySelectorAll('button')[index]?.focus();
    event.preventDefault();
    event.stopPropagation();
  };
  return (
    <aside className="panel" aria-label="Presets, controls and print">
      <div className="panel-tabs" role="tablist" aria-label="Pages" ref={tabs} onKeyDown={onKeyDown}>
        {pages.map((name) => (
          <button
            key={name}
            type="button"
            role="tab"
            id={`tab-${name}`}
            aria-selected={name === open}
            aria-controls="panel-page"
            tabIndex={name === open ? 0 : -1}
            onClick={() => show(name)}
          >
            {nameOf(name)}
          </button>
        ))}
      </div>
      <div
        className="panel-page"
        role="tabpanel"
        id="panel-page"
        aria-labelledby={`tab-${open}`}
        key={open}
        // biome-ignore lint/a11y/noNoninteractiveTabindex: a page that scrolls must be scrollable by keys
        tabIndex={0}
      >
        <h2>{nameOf(open)}</h2>
        {open === 'presets' ? (
          <PresetChooser look={look} photo={photo} />
        ) : open === 'print' ? (
          <PrintPage photo={photo} look={look} />
        ) : (
          <StratumControls stratum={open} look={look} photo={photo} />
        )}
      </div>
    </aside>
  );
}

function nameOf(page: Page): string {
  if (page === 'presets') return 'Presets';
  return page === 'print' ? 'Print' : stratumName(page);
}
