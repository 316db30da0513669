import { FileError } from './fileError.ts';

const cutOff =
  /premature|truncat|end of (file|stream|image)|unexpected eof|\beof\b|not enough data|short|out of (order )?data|insufficient/i;
const outOfMemory = /out of memory|unable to allocate|cannot allocate|Invalid array length/i;
const unsupported = /unsupported|not supported|unknown compression|no decod|plugin/i;

/** The library's own words, cut to one line, in brackets; nothing where it gives none. */
function reasonFrom(failure: unknown): string {
  const text = failure instanceof Error ? failure.message : String(failure);
  const lines = text
    .split('\n')
    .map((line) =>
      line.replace(/^Vips\w*:\s*|^\w+2vips:\s*|^(Input (buffer|file) has corrupt header:\s*)/g, '').trim(),
    )
    .filter(Boolean);
  const reason = lines.find((line) => !/^Input (buffer|file)/.test(line)) ?? lines[0];
  return reason ? ` (${reason.replace(/^Vips\w*:\s*/, '').slice(0, 120)})` : '';
}

/** Puts a failure of the decoder in words. */
export function whyUndecodable(path: string, failure: unknown): FileError {
  const text = failure instanceof Error ? failure.message : String(failure);
  const reason = reasonFrom(failure);
  const options = { cause: failure };
  if (outOfMemory.test(text))
    return new FileError(
      path,
      'does not fit in memory',
      'Close other programs or make a smaller copy.',
      options,
    );
  if (cutOff.test(text))
    return new FileError(
      path,
      `is cut off before its end${reason}`,
      'Copy it again from the camera or the card.',
      options,
    );
  if (unsupported.test(text))
    return new FileError(
      path,
      `is stored in a way that is not read here${reason}`,
      'Export it as JPEG, PNG or TIFF and open that.',
      options,
    );
  return new FileError(
    path,
    `is damaged${reason}`,
    'Copy it again from the camera or the card, or export it again.',
    options,
  );
}
