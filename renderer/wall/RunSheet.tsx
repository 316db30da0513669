import { useState } from 'react';
import type { SeriesSettings } from '../../core/series/seriesDocument.ts';
import type { SeriesView } from '../../main/host/api/seriesCommands.ts';
import { ChooseFolder } from '../saving/ChooseFolder.tsx';
import { Dialog } from '../shell/Dialog.tsx';
import { startRun } from './runWork.ts';
import { FewField, FolderField } from './SheetFields.tsx';
import { wallSheetStore } from './wallStore.ts';
import { changeSeries } from './wallWork.ts';

interface RunSheetProps {
  series: SeriesView;
  settings: SeriesSettings;
}

const formats = [
  { value: 'png', name: 'PNG' },
  { value: 'tiff', name: 'TIFF' },
  { value: 'jpeg', name: 'JPEG' },
  { value: 'webp', name: 'WebP' },
] as const;

/** Where the paintings go and what files they are. */
export function RunSheet({ series, settings }: RunSheetProps) {
  const [folder, setFolder] = useState(`${series.folder}/painted`);
  const [isChoosing, setChoosing] = useState(false);
  const { output, leftOut } = settings;
  const count = series.frames.filter(
    ({ frameId, state }) => state !== 'unreadable' && !leftOut.includes(frameId),
  ).length;
  if (isChoosing)
    return (
      <ChooseFolder
        startPath={series.folder}
        onChosen={(path) => {
          setFolder(path);
          setChoosing(false);
        }}
        onCancel={() => setChoosing(false)}
      />
    );
  const setOutput = (change: Partial<SeriesSettings['output']>) =>
    changeSeries({ output: { ...output, ...change } }, 'What files are made', {
      name: 'output',
      held: false,
    });
  return (
    <Dialog title="Paint the series" className="save-dialog" onClose={() => wallSheetStore.set('none')}>
      <form
        onSubmit={(event) => {
          event.preventDefault();
          void startRun(folder);
        }}
      >
        <FolderField folder={folder} onChange={setFolder} showList={() => setChoosing(true)} />
        <FewField
          label="Format"
          options={formats}
          value={output.format}
          onChange={(format) => setOutput({ format })}
        />
        <label className="field">
          <span>Print, mm</span>
          <input
            type="number"
            min={10}
            max={10_000}
            value={output.printLongEdgeMm}
            onChange={(event) => {
              const printLongEdgeMm = Number(event.target.value);
              if (printLongEdgeMm >= 10 && printLongEdgeMm <= 10_000) setOutput({ printLongEdgeMm });
            }}
          />
        </label>
        <p className="save-size">
          {count === 1 ? 'One frame' : `${count} frames`}, each named as its photograph. A photograph is never
          painted over.
        </p>
        <div className="dialog-foot">
          <button type="submit" className="ink-button" data-first disabled={count === 0}>
            Begin
          </button>
        </div>
      </form>
    </Dialog>
  );
}
