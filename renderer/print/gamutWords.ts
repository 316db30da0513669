import type { OutputSettings } from '../../core/recipes/outputSettings.ts';

/** How much of the picture a print cannot show, as one sentence. */
export function gamutSentence(share01: number, profile: OutputSettings['profile']): string {
  const print = profile === 'srgb' ? 'sRGB' : profile === 'p3' ? 'Display P3' : 'this paper';
  if (share01 === 0) return `Every colour of the picture lies within ${print}`;
  return `${shareInWords(share01)} of the picture is more saturated than ${print}`;
}

/** To a tenth below 10 %; never nothing where there is something, nor all where there is a rest. */
function shareInWords(share01: number): string {
  const percent = share01 * 100;
  if (percent < 0.1) return 'Less than 0.1 %';
  if (percent < 9.95) return `${percent.toFixed(1).replace(/\.0$/, '')} %`;
  if (share01 === 1) return 'All';
  return percent > 99 ? 'More than 99 %' : `${Math.round(percent)} %`;
}
