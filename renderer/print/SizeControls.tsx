import { useId } from 'react';
import { mmPerInch } from '../../core/print/printPlan.ts';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { changeOutput } from '../app/outputWork.ts';
import { FewChoices } from '../controls/FewChoices.tsx';
import { PlainControl } from '../controls/PlainControl.tsx';
import { ValueField } from '../controls/ValueField.tsx';
import {
  inInches,
  inMm,
  longEdgeFor,
  longestPrintMm,
  ownPpi,
  type PlannedPrint,
  readLengthMm,
  shortestPrintMm,
} from './printMeasures.ts';
import { pixelsInWords } from './printWords.ts';

interface SizeControlsProps {
  photo: OpenedPhoto;
  output: OutputSettings;
  plan: PlannedPrint;
}

/** How large the print is, and how many pixels it is made of. */
export function SizeControls({ photo, output, plan }: SizeControlsProps) {
  const longMm = Math.max(plan.widthMm, plan.heightMm);
  const shortMm = Math.min(plan.widthMm, plan.heightMm);
  const helpId = useId();
  return (
    <>
      <PlainControl
        name="Size of the print"
        help="Once it is trimmed. Strokes are as wide on it as their millimetres say."
        helpId={helpId}
      >
        <div className="print-edges">
          <EdgeFields edge="long" lengthMm={longMm} plan={plan} helpId={helpId} />
          <EdgeFields edge="short" lengthMm={shortMm} plan={plan} helpId={helpId} />
        </div>
      </PlainControl>
      <PixelControl photo={photo} output={output} plan={plan} />
    </>
  );
}

interface EdgeFieldsProps {
  edge: 'long' | 'short';
  lengthMm: number;
  plan: PlannedPrint;
  helpId: string;
}

function EdgeFields({ edge, lengthMm, plan, helpId }: EdgeFieldsProps) {
  const name = edge === 'long' ? 'Long edge' : 'Short edge';
  const set = (mm: number) => {
    const printLongEdgeMm = longEdgeFor(plan, edge, mm);
    if (printLongEdgeMm < shortestPrintMm || printLongEdgeMm > longestPrintMm) return false;
    changeOutput({ printLongEdgeMm }, { name: 'print size', held: false });
    return true;
  };
  const typed = (unit: 'mm' | 'in') => (text: string) => {
    const mm = readLengthMm(text, unit);
    if (mm !== null && set(mm)) return null;
    return `The long edge takes ${shortestPrintMm} to ${longestPrintMm.toLocaleString('en')} mm; cm and in may be written too.`;
  };
  const step = (by: number) => (steps: number) =>
    set(Math.max(by, Math.round((lengthMm + steps * by) / by) * by));
  return (
    <>
      <span>{name}</span>
      <ValueField
        label={`${name} in millimetres, typed`}
        shown={`${inMm(lengthMm)} mm`}
        describedBy={helpId}
        onTyped={typed('mm')}
        onStep={step(1)}
      />
      <ValueField
        label={`${name} in inches, typed`}
        shown={`${inInches(lengthMm)} in`}
        describedBy={helpId}
        onTyped={typed('in')}
        onStep={step(mmPerInch / 10)}
      />
    </>
  );
}

const coarsestPpi = 1;
const finestPpi = 9600;
/** Common practice of the trade: press work asks for 300, painterly pictures do with 200. */
const sufficientPpi = 200;

function PixelControl({ photo, output, plan }: SizeControlsProps) {
  const helpId = useId();
  const own = Math.round(ownPpi(photo, output));
  const set = (ppi: number) =>
    changeOutput({ ppi: Math.min(finestPpi, Math.max(coarsestPpi, ppi)), isResampled: true });
  const typePpi = (text: string) => {
    const ppi = Number(text.replace(/ppi|per inch|an inch/i, '').replace(',', '.'));
    if (!(ppi >= coarsestPpi && ppi <= finestPpi))
      return `Takes ${coarsestPpi} to ${finestPpi} pixels an inch.`;
    set(ppi);
    return null;
  };
  const { widthPx, heightPx } = plan.crop;
  const ownPixels = `own ${pixelsInWords(widthPx, heightPx)} lie at ${own} an inch`;
  const help = output.isResampled
    ? `Painted at ${pixelsInWords(plan.widthPx, plan.heightPx)}; the photograph’s ${ownPixels}.`
    : `The photograph’s ${ownPixels}. ${own < sufficientPpi ? 'Press work asks for 300, paint will do with 200.' : 'Press work asks for 300.'}`;
  return (
    <PlainControl
      name="Pixels"
      help={help}
      helpId={helpId}
      value={
        <ValueField
          label="Pixels an inch, typed"
          shown={`${output.isResampled ? Number(output.ppi.toFixed(2)) : own} ppi`}
          describedBy={helpId}
          onTyped={typePpi}
          onStep={(steps) => set(Math.round(plan.ppi + steps * 10))}
        />
      }
    >
      <FewChoices
        legend="Pixels of the print"
        name="print-pixels"
        choices={[
          { value: 'own', label: 'Its own', help: 'Nothing is resampled' },
          { value: 'asked', label: 'So many an inch', help: 'Resampled before it is painted' },
        ]}
        value={output.isResampled ? 'asked' : 'own'}
        describedBy={helpId}
        onChoose={(choice) => changeOutput({ isResampled: choice === 'asked' })}
      />
    </PlainControl>
  );
}
