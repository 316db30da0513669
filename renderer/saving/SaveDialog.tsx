import { useState } from 'react';
import type { OpenedPhoto, SavedPainting } from '../../main/host/api/hostCommands.ts';
import { useOutput } from '../app/outputWork.ts';
import { host } from '../host/host.ts';
import { sizeInWords } from '../opening/FolderList.tsx';
import { planOf } from '../print/printMeasures.ts';
import { formatOf, pixelsInWords, printSentence } from '../print/printWords.ts';
import { Dialog } from '../shell/Dialog.tsx';
import type { Look } from '../state/lookStore.ts';
import { dialogStore, panelStore } from '../state/panelStore.ts';
import { sessionStore } from '../state/photoStore.ts';
import { useStore } from '../state/store.ts';
import { endComparing } from '../states/comparing.ts';
import { ChooseFolder, chooseFolder } from './ChooseFolder.tsx';
import { cancelSave, type SaveState, saveStore, startSave } from './saveWork.ts';

/** Saving the painting at full size: name and folder, what file the print page asks for, then progress. */
export function SaveDialog({ photo, look }: { photo: OpenedPhoto; look: Look }) {
  const save = useStore(saveStore);
  const output = useOutput();
  const [name, setName] = useState(`${photo.name.replace(/\.[^.]+$/, '')} painted`);
  const [folder, setFolder] = useState(photo.folder);
  const [isChoosingFolder, setChoosingFolder] = useState(false);
  const { ending } = formatOf(output);
  const plan = planOf(photo, output);
  const isSaving = save.progress !== null;
  const close = () => {
    if (!isSaving) saveStore.update((state) => ({ ...state, saved: null, trouble: null }));
    dialogStore.set('none');
  };
  if (isChoosingFolder)
    return (
      <ChooseFolder
        startPath={folder}
        onChosen={(path) => {
          setFolder(path);
          setChoosingFolder(false);
        }}
        onCancel={() => setChoosingFolder(false)}
      />
    );
  if (save.saved) return <Saved saved={save.saved} onClose={close} />;
  return (
    <Dialog title="Save the painting" className="save-dialog" onClose={close}>
      <form
        onSubmit={(event) => {
          event.preventDefault();
          void startSave({
            photoId: photo.photoId,
            parameters: look.parameters,
            folder,
            name: `${name.trim()}${ending}`,
            output: { ...output, cropFrame: output.cropFrame ?? null },
          });
        }}
      >
        <fieldset className="save-fields" disabled={isSaving}>
          <legend className="unseen">File</legend>
          <label className="field">
            <span>Name</span>
            <span className="field-name">
              <input
                type="text"
                data-first
                required
                maxLength={180}
                value={name}
                onChange={(event) => setName(event.target.value)}
              />
              <span className="field-ending">{ending}</span>
            </span>
          </label>
          <div className="field">
            <span>Folder</span>
            <span className="field-folder">
              <span className="field-path">{folder}</span>
              <button
                type="button"
                className="plain-button"
                onClick={() => void chooseFolder(folder, setFolder, () => setChoosingFolder(true))}
              >
                Change<span className="unseen"> the folder</span>…
              </button>
            </span>
          </div>
          <div className="field">
            <span>Print</span>
            <span className="field-folder">
              <span className="field-print">{printSentence(photo, output)}</span>
              <button
                type="button"
                className="plain-button"
                onClick={() => {
                  close();
                  endComparing();
                  panelStore.set('print');
                }}
              >
                Change<span className="unseen"> the print</span>…
              </button>
            </span>
          </div>
        </fieldset>
        <p className="save-size">
          {pixelsInWords(plan.fileWidthPx, plan.fileHeightPx)}. The photograph itself stays as it is; a name
          already taken gets a number.
        </p>
        {save.trouble && (
          <p className="fault" role="alert">
            {save.trouble.message} {save.trouble.remedy}
          </p>
        )}
        {isSaving ? <Progress save={save} /> : null}
        <div className="dialog-foot">
          {isSaving ? (
            // Keys keep the two apart: one button that turned into the other would submit the form at once.
            <button key="cancel" type="button" className="quiet-button" onClick={cancelSave}>
              Cancel saving
            </button>
          ) : (
            <button key="save" type="submit" className="ink-button">
              Save
            </button>
          )}
        </div>
      </form>
    </Dialog>
  );
}

const stageWords: Record<string, string> = {
  opening: 'Reading the photograph',
  grain: 'Finding the grain',
  body: 'Painting',
  line: 'Drawing the line',
  compose: 'Laying the strata together',
  writing: 'Writing the file',
};

function Progress({ save }: { save: SaveState }) {
  const { fraction01, stage } = save.progress!;
  const words = stageWords[stage] ?? 'Starting';
  return (
    <div className="progress">
      <progress max={1} value={fraction01} aria-label="Saving" />
      <span role="status">
        {words}, {Math.round(fraction01 * 100)} %
      </span>
    </div>
  );
}

function Saved({ saved, onClose }: { saved: SavedPainting; onClose: () => void }) {
  const canReveal = useStore(sessionStore, (session) => session?.desktop.revealFiles ?? false);
  return (
    <Dialog title="Saved" className="save-dialog" onClose={onClose}>
      <p className="saved-name" role="status">
        {saved.name}
      </p>
      <p className="save-size">
        {saved.folder}
        <br />
        {pixelsInWords(saved.widthPx, saved.heightPx)}, {sizeInWords(saved.sizeBytes)}, painted in{' '}
        {(saved.tookMs / 1000).toFixed(1)} s.
        {saved.layersName && ` Its layers are in ${saved.layersName}.`}
      </p>
      <div className="dialog-foot">
        {canReveal && (
          <button
            type="button"
            className="quiet-button"
            onClick={() => void host.call('revealFile', { path: saved.path })}
          >
            Show the file
          </button>
        )}
        <button type="button" className="ink-button" data-first onClick={onClose}>
          Back to the easel
        </button>
      </div>
    </Dialog>
  );
}
