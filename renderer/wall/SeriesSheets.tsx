import { useState } from 'react';
import { newCallId } from '../../core/hostProtocol/hostCaller.ts';
import type { SeriesSettings } from '../../core/series/seriesDocument.ts';
import type { ProofMade, SeriesView } from '../../main/host/api/seriesCommands.ts';
import { host, isUnwanted, type Trouble, troubleOf } from '../host/host.ts';
import { ChooseFolder, chooseFolder } from '../saving/ChooseFolder.tsx';
import { Dialog } from '../shell/Dialog.tsx';
import { useStore } from '../state/store.ts';
import { proofProgressStore } from './proofProgress.ts';
import { startRun } from './runWork.ts';
import { wallSheetStore } from './wallStore.ts';
import { changeSeries } from './wallWork.ts';

interface SheetProps {
  series: SeriesView;
  settings: SeriesSettings;
}

const close = () => wallSheetStore.set('none');

const formats = [
  { value: 'png', name: 'PNG' },
  { value: 'tiff', name: 'TIFF' },
  { value: 'jpeg', name: 'JPEG' },
  { value: 'webp', name: 'WebP' },
] as const;

/** Where the paintings go and what files they are. */
export function RunSheet({ series, settings }: SheetProps) {
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
    <Dialog title="Paint the series" className="save-dialog" onClose={close}>
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

const papers = ['A4', 'A3', 'A5', 'letter'] as const;

/** A sheet of small pictures to send for approval. */
export function ProofSheet({ series }: SheetProps) {
  const [folder, setFolder] = useState(series.folder);
  const [isChoosing, setChoosing] = useState(false);
  const [format, setFormat] = useState<'pdf' | 'png'>('pdf');
  const [paper, setPaper] = useState<string>('A4');
  const [landscape, setLandscape] = useState(false);
  const [columns, setColumns] = useState(3);
  const [title, setTitle] = useState(series.name);
  const [work, setWork] = useState<AbortController | null>(null);
  const [made, setMade] = useState<ProofMade | null>(null);
  const [trouble, setTrouble] = useState<Trouble | null>(null);
  const progress = useStore(proofProgressStore);
  if (isChoosing)
    return (
      <ChooseFolder
        startPath={folder}
        onChosen={(path) => {
          setFolder(path);
          setChoosing(false);
        }}
        onCancel={() => setChoosing(false)}
      />
    );
  if (made) return <ProofDone made={made} />;
  const make = async () => {
    const abort = new AbortController();
    const callId = newCallId();
    proofProgressStore.set({ callId, fraction01: 0 });
    setWork(abort);
    setTrouble(null);
    try {
      const { seriesId } = series;
      const name = `${title.trim() || series.name} proof`;
      const order = { seriesId, folder, name, format, paper, landscape, columns, title };
      setMade(await host.call('makeProof', order, { signal: abort.signal, callId }));
    } catch (error) {
      if (!isUnwanted(error)) setTrouble(troubleOf(error));
    } finally {
      proofProgressStore.set(null);
      setWork(null);
    }
  };
  return (
    <Dialog
      title="Make a proof sheet"
      className="save-dialog"
      onClose={() => {
        work?.abort();
        close();
      }}
    >
      <form
        onSubmit={(event) => {
          event.preventDefault();
          void make();
        }}
      >
        <fieldset className="save-fields" disabled={work !== null}>
          <legend className="unseen">Sheet</legend>
          <label className="field">
            <span>Title</span>
            <input
              type="text"
              data-first
              maxLength={120}
              value={title}
              onChange={(event) => setTitle(event.target.value)}
            />
          </label>
          <FolderField folder={folder} onChange={setFolder} showList={() => setChoosing(true)} />
          <FewField
            label="File"
            options={[
              { value: 'pdf', name: 'PDF' },
              { value: 'png', name: 'PNG, one a page' },
            ]}
            value={format}
            onChange={setFormat}
          />
          <FewField
            label="Paper"
            options={papers.map((value) => ({
              value,
              name: value === 'letter' ? 'Letter' : value,
            }))}
            value={paper}
            onChange={setPaper}
          />
          <FewField
            label="Way up"
            options={[
              { value: 'upright', name: 'Upright' },
              { value: 'lying', name: 'On its long edge' },
            ]}
            value={landscape ? 'lying' : 'upright'}
            onChange={(value) => setLandscape(value === 'lying')}
          />
          <label className="field">
            <span>Across</span>
            <input
              type="number"
              min={1}
              max={12}
              value={columns}
              onChange={(event) => setColumns(Math.min(12, Math.max(1, Number(event.target.value))))}
            />
          </label>
        </fieldset>
        {trouble && (
          <p className="fault" role="alert">
            {trouble.message} {trouble.remedy}
          </p>
        )}
        {work && (
          <div className="progress">
            <progress max={1} value={progress?.fraction01 ?? 0} aria-label="Making the sheet" />
            <span role="status">{Math.round((progress?.fraction01 ?? 0) * 100)} %</span>
          </div>
        )}
        <div className="dialog-foot">
          {work ? (
            <button key="cancel" type="button" className="quiet-button" onClick={() => work.abort()}>
              Cancel
            </button>
          ) : (
            <button key="make" type="submit" className="ink-button">
              Make the sheet
            </button>
          )}
        </div>
      </form>
    </Dialog>
  );
}

function ProofDone({ made }: { made: ProofMade }) {
  return (
    <Dialog title="The proof sheet is made" className="save-dialog" onClose={close}>
      <p className="saved-name" role="status">
        {made.files.map((file) => file.split(/[\\/]/).at(-1)).join(', ')}
      </p>
      <p className="save-size">
        {made.folder}
        <br />
        {made.frames === 1 ? 'One frame' : `${made.frames} frames`} on{' '}
        {made.pages === 1 ? 'one page' : `${made.pages} pages`}.
      </p>
      {made.remarks.map((remark) => (
        <p key={remark} className="fault">
          {remark}
        </p>
      ))}
      <div className="dialog-foot">
        <button type="button" className="ink-button" data-first onClick={close}>
          Back to the wall
        </button>
      </div>
    </Dialog>
  );
}

function FolderField({
  folder,
  onChange,
  showList,
}: {
  folder: string;
  onChange: (path: string) => void;
  showList: () => void;
}) {
  return (
    <div className="field">
      <span>Folder</span>
      <span className="field-folder">
        <span className="field-path">{folder}</span>
        <button
          type="button"
          className="plain-button"
          onClick={() => void chooseFolder(folder, onChange, showList)}
        >
          Change…
        </button>
      </span>
    </div>
  );
}

interface FewProps<Value extends string> {
  label: string;
  options: readonly { value: Value; name: string }[];
  value: Value;
  onChange: (value: Value) => void;
}

function FewField<Value extends string>({ label, options, value, onChange }: FewProps<Value>) {
  return (
    <fieldset className="field few-field">
      <legend>{label}</legend>
      <span className="few">
        {options.map((option) => (
          <label key={option.value} className="few-choice">
            <input
              className="unseen"
              type="radio"
              name={`sheet-${label}`}
              value={option.value}
              checked={option.value === value}
              onChange={() => onChange(option.value)}
            />
            <span>{option.name}</span>
          </label>
        ))}
      </span>
    </fieldset>
  );
}
