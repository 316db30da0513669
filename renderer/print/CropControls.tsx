import { useId } from 'react';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { changeOutput } from '../app/outputWork.ts';
import { FewChoices } from '../controls/FewChoices.tsx';
import { PlainControl } from '../controls/PlainControl.tsx';
import { Track } from '../controls/Track.tsx';
import { ValueField } from '../controls/ValueField.tsx';
import { CheckLine } from './CheckLine.tsx';
import {
  type AspectChoice,
  aspectChoices,
  aspectFor,
  aspectInWords,
  choiceOf,
  readAspect,
} from './cropAspects.ts';
import { freeAxis } from './cropMoves.ts';
import { inMm, readLengthMm } from './printMeasures.ts';

interface CropControlsProps {
  photo: OpenedPhoto;
  output: OutputSettings;
}

/** What of the picture is printed, and what lies around it. */
export function CropControls({ photo, output }: CropControlsProps) {
  return (
    <>
      <CropControl photo={photo} output={output} />
      <BleedControl bleedMm={output.bleedMm} />
      <CheckLine
        label="Trim marks"
        help="Lines in a white margin, where the paper is to be cut."
        isChecked={output.trimMarks ?? false}
        onChange={(trimMarks) => changeOutput({ trimMarks })}
      />
    </>
  );
}

function CropControl({ photo, output }: CropControlsProps) {
  const helpId = useId();
  const frame = output.cropFrame ?? null;
  const aspect = frame?.aspect ?? null;
  const cut = (next: number) => changeOutput({ cropFrame: { x01: 0.5, y01: 0.5, ...frame, aspect: next } });
  const choose = (choice: AspectChoice) => {
    const ratio = aspectChoices.find(({ value }) => value === choice)?.ratio ?? null;
    if (ratio === null) changeOutput({ cropFrame: null });
    else cut(aspectFor(ratio, photo));
  };
  const isMovable = frame !== null && freeAxis(photo, frame) !== null;
  return (
    <PlainControl
      name="Crop"
      helpId={helpId}
      help={
        isMovable
          ? 'Drag the frame on the picture, or move it with the arrow keys.'
          : 'The aspect of the print; the frame is as large as the picture allows.'
      }
      value={
        <ValueField
          label="Aspect of the print, typed"
          shown={aspectInWords(aspect ?? photo.widthPx / photo.heightPx)}
          describedBy={helpId}
          onTyped={(text) => {
            const typed = readAspect(text);
            if (typed === null) return 'Takes width and height, such as 4:5.';
            cut(typed);
            return null;
          }}
        />
      }
    >
      <div className="print-crop">
        <FewChoices
          legend="Crop to an aspect"
          name="print-crop"
          choices={aspectChoices}
          value={choiceOf(aspect)}
          describedBy={helpId}
          onChoose={choose}
        />
        {aspect !== null && aspect !== 1 && (
          <button
            type="button"
            className="plain-button print-turn"
            title="Upright to lying, and back"
            onClick={() => cut(1 / aspect)}
          >
            Turn<span className="unseen"> the frame</span>
          </button>
        )}
      </div>
    </PlainControl>
  );
}

/** Of the track; more can be typed. */
const usualBleedMm = 10;
const widestBleedMm = 100;
const bleedStepMm = 0.5;

function BleedControl({ bleedMm }: { bleedMm: number }) {
  const helpId = useId();
  const set = (mm: number) => changeOutput({ bleedMm: Math.min(widestBleedMm, Math.max(0, mm)) });
  const shown = `${inMm(bleedMm)} mm`;
  return (
    <PlainControl
      name="Bleed"
      help="The picture goes on beyond the cut, mirrored, so that no white edge shows. Printers ask for 3 mm."
      helpId={helpId}
      value={
        <ValueField
          label="Bleed, typed"
          shown={shown}
          describedBy={helpId}
          onTyped={(text) => {
            const mm = readLengthMm(text);
            if (mm === null || mm > widestBleedMm) return `Takes 0 to ${widestBleedMm} mm.`;
            set(mm);
            return null;
          }}
          onStep={(steps) => set(bleedMm + steps * bleedStepMm)}
        />
      }
    >
      <Track
        label="Bleed"
        min={0}
        max={Math.max(usualBleedMm, bleedMm)}
        step={bleedStepMm}
        value={bleedMm}
        mark={null}
        valueText={shown}
        describedBy={helpId}
        onChange={set}
        onReset={() => set(0)}
      />
    </PlainControl>
  );
}
