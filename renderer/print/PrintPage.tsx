import { useMemo } from 'react';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { useOutput } from '../app/outputWork.ts';
import type { Look } from '../state/lookStore.ts';
import { ColourControls } from './ColourControls.tsx';
import { CropControls } from './CropControls.tsx';
import { FileControls } from './FileControls.tsx';
import { PrintSheet } from './PrintSheet.tsx';
import { planOf } from './printMeasures.ts';
import { SizeControls } from './SizeControls.tsx';

/** The file made for the printer: its size on paper, its colours, its kind. */
export function PrintPage({ photo, look }: { photo: OpenedPhoto; look: Look }) {
  const output = useOutput();
  const plan = useMemo(() => planOf(photo, output), [photo, output]);
  return (
    <>
      <p className="panel-sentence">What file is made for the printer.</p>
      <PrintSheet photo={photo} look={look} output={output} plan={plan} />
      <SizeControls photo={photo} output={output} plan={plan} />
      <CropControls photo={photo} output={output} />
      <div className="print-part">
        <ColourControls photo={photo} output={output} />
      </div>
      <div className="print-part">
        <FileControls output={output} />
      </div>
    </>
  );
}
