import { useId, useState } from 'react';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { OpenedPhoto, ProfileFacts } from '../../main/host/api/hostCommands.ts';
import { changeOutput } from '../app/outputWork.ts';
import { PlainControl } from '../controls/PlainControl.tsx';
import { CheckLine } from './CheckLine.tsx';
import { ChooseProfile, chooseProfile } from './ChooseProfile.tsx';
import { ListChoice } from './ListChoice.tsx';
import { holdsInks, profileName } from './printWords.ts';
import { useProfileFacts } from './useProfileFacts.ts';

const intents = [
  {
    value: 'relative',
    label: 'Relative',
    help: 'What the print can show stays as it is; the rest goes to the nearest it can.',
  },
  {
    value: 'perceptual',
    label: 'Perceptual',
    help: 'All colours give way together, so that strong ones stay apart.',
  },
  { value: 'saturation', label: 'Saturation', help: 'Strong colours stay strong, though they turn.' },
  {
    value: 'absolute',
    label: 'Absolute',
    help: 'As relative, with the white of the paper in it: to show one paper on another.',
  },
] as const;

/** The colours the file is made for; how they are brought in, where they are others than the photograph's. */
export function ColourControls({ photo, output }: { photo: OpenedPhoto; output: OutputSettings }) {
  const helpId = useId();
  const [isChoosing, setChoosing] = useState(false);
  const { profile } = output;
  const { facts, trouble } = useProfileFacts(photo.photoId, profile);
  const file = typeof profile === 'object' ? profile.file : null;
  const take = (path: string) => changeOutput({ profile: { file: path } });
  const choose = (value: string) => {
    if (value === 'choose') void chooseProfile(take, () => setChoosing(true));
    else if (value !== 'file') changeOutput({ profile: value as 'keep' | 'srgb' | 'p3' });
  };
  const isInked = facts?.inks === 'CMYK';
  const fault = trouble
    ? `${trouble.message} ${trouble.remedy}`
    : isInked && !holdsInks(output.format)
      ? 'This profile has four inks, which PNG and WebP cannot hold. Choose TIFF or JPEG below.'
      : null;
  return (
    <>
      <PlainControl name="Colours" help={helpOf(profile, facts)} helpId={helpId} fault={fault}>
        <select
          className="choice"
          aria-label="Colours"
          aria-describedby={helpId}
          value={file === null ? (profile as string) : 'file'}
          onChange={(event) => choose(event.target.value)}
        >
          <option value="keep">The photograph’s own</option>
          <option value="srgb">sRGB</option>
          <option value="p3">Display P3</option>
          {file !== null && <option value="file">{facts?.name ?? profileName({ file })}</option>}
          <option value="choose">{file === null ? 'An ICC file…' : 'Another ICC file…'}</option>
        </select>
      </PlainControl>
      {facts?.isConverted && (
        <>
          <ListChoice
            name="Colours out of reach"
            choices={intents}
            value={output.intent}
            onChoose={(intent) => changeOutput({ intent })}
          />
          <CheckLine
            label="Fit the black"
            help="The darkest tone becomes the darkest that the print can hold."
            isChecked={output.blackPointCompensation}
            onChange={(blackPointCompensation) => changeOutput({ blackPointCompensation })}
          />
        </>
      )}
      {isChoosing && (
        <ChooseProfile
          startPath={file?.replace(/[\\/][^\\/]*$/, '')}
          onChosen={(path) => {
            take(path);
            setChoosing(false);
          }}
          onCancel={() => setChoosing(false)}
        />
      )}
    </>
  );
}

function helpOf(profile: OutputSettings['profile'], facts: ProfileFacts | null): string {
  if (profile === 'keep') return 'Nothing is converted; the profile goes along.';
  if (profile === 'srgb') return 'What screens and most photo printers ask for.';
  if (profile === 'p3') return 'Wider: for screens that show it.';
  if (!facts) return profile.file;
  return facts.inks === 'CMYK' ? `Four inks, by ${profileName(profile)}.` : `By ${profileName(profile)}.`;
}
