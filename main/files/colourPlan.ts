import type { Metadata } from 'sharp';
import { rgbProfileOfGrey } from '../../core/colour/matrixProfile.ts';
import { isUsableProfile, lightnessOfHalf } from '../../core/colour/profileCheck.ts';
import { profileSpace } from './inputProfile.ts';

/** What becomes of a photo's colours while it is read. */
export interface ColourPlan {
  /** Numbers kept as stored, or converted by the library through the embedded profile to sRGB. */
  convert: boolean;
  /** What is read as stored and then converted by ourselves, at 16 bits, to a space that holds all its colours. */
  through?: { profile: Uint8Array; space: 'CMYK' | 'RGB' };
  iccProfile?: Uint8Array;
  remarks: string[];
}

/**
 * Half of the full number is as light as that in spaces made for looking at (L* RGB 50, gamma 1.8 60); in numbers of
 * light itself it is 76, and paint mixed from those turns dark edges light.
 */
const lightestHalf = 68;

/** @param metadata of the photo's file, as the image library reads it */
export function planColours(metadata: Metadata): ColourPlan {
  const { space, icc } = metadata;
  const embedded = icc && new Uint8Array(icc.buffer, icc.byteOffset, icc.byteLength);
  const described = embedded && profileSpace(embedded);
  const isUsable = Boolean(embedded && described && isUsableProfile(embedded));
  if (space === 'cmyk') return planInks(embedded, described === 'CMYK' && isUsable);
  if (space === 'lab' || space === 'labs')
    return { convert: true, remarks: ['The photo is in Lab colours: converted to sRGB.'] };
  if (space === 'b-w' || space === 'grey16')
    return planGrey(embedded, (described === 'GRAY' && isUsable && embedded) || undefined);
  if (!embedded) return { convert: false, remarks: [] };
  if (described && described !== 'RGB ')
    return asSrgb(`The embedded profile is for ${described.trim()}, not for RGB: left out, sRGB assumed.`);
  if (!isUsable) return asSrgb('The embedded colour profile is damaged: left out, sRGB assumed.');
  return planRgb(embedded, []);
}

function asSrgb(remark: string): ColourPlan {
  return { convert: false, remarks: [remark] };
}

function planRgb(profile: Uint8Array, remarks: string[]): ColourPlan {
  const half = lightnessOfHalf(profile);
  if (half === null || half <= lightestHalf) return { convert: false, iccProfile: profile, remarks };
  const remark =
    'The numbers of the photo are amounts of light: converted through its profile to an RGB space made for looking at.';
  return { convert: false, through: { profile, space: 'RGB' }, remarks: [...remarks, remark] };
}

function planInks(embedded: Uint8Array | undefined, isUsable: boolean): ColourPlan {
  if (embedded && isUsable)
    return {
      convert: true,
      through: { profile: embedded, space: 'CMYK' },
      remarks: [
        'The photo is CMYK: converted through its embedded profile to an RGB space that holds its colours.',
      ],
    };
  const why = embedded ? 'as its own is damaged or not for CMYK' : 'as it carries none of its own';
  return {
    convert: true,
    remarks: [`The photo is CMYK: converted to sRGB through a general printing profile, ${why}.`],
  };
}

function planGrey(embedded: Uint8Array | undefined, greyProfile: Uint8Array | undefined): ColourPlan {
  const remarks = ['The photo is grey: painted as RGB with equal red, green and blue.'];
  const asRgb = greyProfile && rgbProfileOfGrey(greyProfile);
  if (asRgb)
    return planRgb(asRgb, [...remarks, 'Its grey profile is carried on as one for RGB with the same greys.']);
  if (embedded) remarks.push('Its profile does not fit a grey picture: left out, sRGB assumed.');
  return { convert: false, remarks };
}
