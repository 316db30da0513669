import { useState } from 'react';
import type { OpenedPhoto, OutputFormatName, SavedPainting } from '../../main/host/api/hostCommands.ts';
import { host } from '../host/host.ts';
import { sizeInWords } from '../opening/FolderList.tsx';
import { Dialog } from '../shell/Dialog.tsx';
import type { Look } from '../state/lookStore.ts';
import { dialogStore } from '../state/panelStore.ts';
import { sessionStore } from '../state/photoStore.ts';
import { useStore } from '../state/store.ts';
import { ChooseFolder, chooseFolder } from './ChooseFolder.tsx';
import { cancelSave, type SaveState, saveStore, startSave } from './saveWork.ts';

const formats: readonly { value: OutputFormatName; name: string; ending: string; help: string }[] = [
  { value: 'png', name: 'PNG', ending: '.png', help: 'Exact, every pixel as painted.' },
  { value: 'tiff', name: 'TIFF', ending: '.tif', help: 'Exact, for the printer.' },
  { value: 'jpeg', name: 'JPEG', ending: '.jpg', help: 'Small, for sending; not exact.' },
  { value: 'webp', name: 'WebP', ending: '.webp', help: 'Small, for the web; not exact.' },
];

/** Saving the painting at full size: format, name, folder, then progress. */
export function SaveDialog({ photo, look }: { photo: OpenedPhoto; look: Look }) {
  const save = useStore(saveStore);
  const [format, setFormat] = useState<OutputFormatName>(save.lastFormat);
  const [depth, setDepth] = useState<8 | 16>(photo.depth);
  const [quality, setQuality] = useState(92);
  const [name, setName] = useState(`${photo.name.replace(/\.[^.]+$/, '')} painted`);
  const [folder, setFolder] = useState(photo.folder);
  const [isChoosingFolder, setChoosingFolder] = useState(false);
  const chosen = formats.find(({ value }) => value === format)!;
  const isExact = format === 'png' || format === 'tiff';
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
            printLongEdgeMm: look.printLongEdgeMm,
            folder,
            name: `${name.trim()}${chosen.ending}`,
            format,
            depth: isExact ? depth : undefined,
            quality: isExact ? undefined : quality,
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
              <span className="field-ending">{chosen.ending}</span>
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
                Change…
              </button>
            </span>
          </div>
          <fieldset className="field few-field">
            <legend>Format</legend>
            <span className="few">
              {formats.map(({ value, name: shown }) => (
                <label key={value} className="few-choice">
                  <input
                    className="unseen"
                    type="radio"
                    name="format"
                    value={value}
                    checked={value === format}
                    onChange={() => setFormat(value)}
                  />
                  <span>{shown}</span>
                </label>
              ))}
            </span>
            <span className="field-help">{chosen.help}</span>
          </fieldset>
          {isExact ? (
            <fieldset className="field few-field">
              <legend>Depth</legend>
              <span className="few">
                {([8, 16] as const).map((bits) => (
                  <label key={bits} className="few-choice">
                    <input
                      className="unseen"
                      type="radio"
                      name="depth"
                      value={bits}
                      checked={bits === depth}
                      onChange={() => setDepth(bits)}
                    />
                    <span>{bits} bits</span>
                  </label>
                ))}
              </span>
            </fieldset>
          ) : (
            <label className="field">
              <span>Quality</span>
              <span className="field-quality">
                <input
                  className="track-input"
                  type="range"
                  min={50}
                  max={100}
                  value={quality}
                  onChange={(event) => setQuality(Number(event.target.value))}
                />
                <output>{quality}</output>
              </span>
            </label>
          )}
        </fieldset>
        <p className="save-size">
          {photo.widthPx.toLocaleString('en')} × {photo.heightPx.toLocaleString('en')} px. The photograph
          itself stays as it is; a name already taken gets a number.
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
        {saved.widthPx.toLocaleString('en')} × {saved.heightPx.toLocaleString('en')} px,{' '}
        {sizeInWords(saved.sizeBytes)}, painted in {(saved.tookMs / 1000).toFixed(1)} s.
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
