import { useState } from 'react';
import { newCallId } from '../../core/hostProtocol/hostCaller.ts';
import type { ProofMade, SeriesView } from '../../main/host/api/seriesCommands.ts';
import { host, isUnwanted, type Trouble, troubleOf } from '../host/host.ts';
import { ChooseFolder } from '../saving/ChooseFolder.tsx';
import { Dialog } from '../shell/Dialog.tsx';
import { useStore } from '../state/store.ts';
import { proofProgressStore } from './proofProgress.ts';
import { FewField, FolderField } from './SheetFields.tsx';
import { wallSheetStore } from './wallStore.ts';

const close = () => wallSheetStore.set('none');

const papers = ['A4', 'A3', 'A5', 'letter'] as const;

/** A sheet of small pictures to send for approval. */
export function ProofSheet({ series }: { series: SeriesView }) {
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
