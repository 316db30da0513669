import { useId } from 'react';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import { changeOutput } from '../app/outputWork.ts';
import { FewChoices } from '../controls/FewChoices.tsx';
import { PlainControl } from '../controls/PlainControl.tsx';
import { Track } from '../controls/Track.tsx';
import { ValueField } from '../controls/ValueField.tsx';
import { ListChoice } from './ListChoice.tsx';
import { formatOf, formats, isExact } from './printWords.ts';

const metadataChoices = [
  { value: 'essential', label: 'Essential', help: 'Author, rights and how it was taken; not where.' },
  { value: 'all', label: 'Everything', help: 'All that the camera wrote, the place too.' },
  { value: 'none', label: 'Nothing', help: 'The picture and its profile alone.' },
] as const;

const layerChoices = [
  { value: 'none', label: 'None', help: 'One file, as composed.' },
  { value: 'ora', label: 'OpenRaster', help: 'A second file beside it, with the strata as layers.' },
  { value: 'tiff', label: 'TIFFs', help: 'A folder beside it, with each stratum in 16 bits.' },
] as const;

/** The file itself. */
export function FileControls({ output }: { output: OutputSettings }) {
  return (
    <>
      <FormatControl output={output} />
      {isExact(output) ? <DepthControl depth={output.depth} /> : <QualityControl quality={output.quality} />}
      <details className="finer">
        <summary>Finer points</summary>
        <ListChoice
          name="What the file tells"
          choices={metadataChoices}
          value={output.metadata}
          onChoose={(metadata) => changeOutput({ metadata })}
        />
        <ListChoice
          name="Layers"
          choices={layerChoices}
          value={output.layers}
          onChoose={(layers) => changeOutput({ layers })}
        />
      </details>
    </>
  );
}

function FormatControl({ output }: { output: OutputSettings }) {
  const helpId = useId();
  return (
    <PlainControl name="Format" help={formatOf(output).help} helpId={helpId}>
      <FewChoices
        legend="Format"
        name="print-format"
        choices={formats.map(({ value, name }) => ({ value, label: name }))}
        value={output.format}
        describedBy={helpId}
        onChoose={(format) => changeOutput({ format })}
      />
    </PlainControl>
  );
}

function DepthControl({ depth }: { depth: 8 | 16 }) {
  const helpId = useId();
  return (
    <PlainControl
      name="Depth"
      help={
        depth === 16
          ? 'For whoever goes on working on it.'
          : 'For the press; soft tones are kept by a fine grain.'
      }
      helpId={helpId}
    >
      <FewChoices
        legend="Depth"
        name="print-depth"
        choices={[
          { value: '8', label: '8 bits' },
          { value: '16', label: '16 bits' },
        ]}
        value={depth === 16 ? '16' : '8'}
        describedBy={helpId}
        onChoose={(bits) => changeOutput({ depth: bits === '16' ? 16 : 8 })}
      />
    </PlainControl>
  );
}

const lowestQuality = 1;
/** Of the track: below it nobody wants a painting. */
const usualLowestQuality = 50;
const highestQuality = 100;

function QualityControl({ quality }: { quality: number }) {
  const helpId = useId();
  const set = (next: number) =>
    changeOutput({ quality: Math.round(Math.min(highestQuality, Math.max(lowestQuality, next))) });
  return (
    <PlainControl
      name="Quality"
      help="Higher is nearer to the painting, and a larger file."
      helpId={helpId}
      value={
        <ValueField
          label="Quality, typed"
          shown={String(quality)}
          describedBy={helpId}
          onTyped={(text) => {
            const typed = Number(text);
            if (!(typed >= lowestQuality && typed <= highestQuality)) return 'Takes 1 to 100.';
            set(typed);
            return null;
          }}
          onStep={(steps) => set(quality + steps)}
        />
      }
    >
      <Track
        label="Quality"
        min={Math.min(usualLowestQuality, quality)}
        max={highestQuality}
        step={1}
        value={quality}
        mark={null}
        valueText={String(quality)}
        describedBy={helpId}
        onChange={set}
        onReset={() => set(92)}
      />
    </PlainControl>
  );
}
