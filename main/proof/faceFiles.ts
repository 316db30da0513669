import alegreyaCyrillic400Italic from '@fontsource/alegreya/files/alegreya-cyrillic-400-italic.woff?inline';
import alegreyaCyrillic500Normal from '@fontsource/alegreya/files/alegreya-cyrillic-500-normal.woff?inline';
import alegreyaCyrillicExt400Italic from '@fontsource/alegreya/files/alegreya-cyrillic-ext-400-italic.woff?inline';
import alegreyaCyrillicExt500Normal from '@fontsource/alegreya/files/alegreya-cyrillic-ext-500-normal.woff?inline';
import alegreyaGreek400Italic from '@fontsource/alegreya/files/alegreya-greek-400-italic.woff?inline';
import alegreyaGreek500Normal from '@fontsource/alegreya/files/alegreya-greek-500-normal.woff?inline';
import alegreyaLatin400Italic from '@fontsource/alegreya/files/alegreya-latin-400-italic.woff?inline';
import alegreyaLatin500Normal from '@fontsource/alegreya/files/alegreya-latin-500-normal.woff?inline';
import alegreyaLatinExt400Italic from '@fontsource/alegreya/files/alegreya-latin-ext-400-italic.woff?inline';
import alegreyaLatinExt500Normal from '@fontsource/alegreya/files/alegreya-latin-ext-500-normal.woff?inline';
import alegreyaVietnamese400Italic from '@fontsource/alegreya/files/alegreya-vietnamese-400-italic.woff?inline';
import alegreyaVietnamese500Normal from '@fontsource/alegreya/files/alegreya-vietnamese-500-normal.woff?inline';
import instrumentSansLatin400Normal from '@fontsource/instrument-sans/files/instrument-sans-latin-400-normal.woff?inline';
import instrumentSansLatinExt400Normal from '@fontsource/instrument-sans/files/instrument-sans-latin-ext-400-normal.woff?inline';
import type { FaceName } from '../../core/proof/proofPage.ts';

// Each face comes cut into scripts. Imported as text, they lie in the bundle: the program looks for no font on the
// machine it runs on, and a sheet looks the same everywhere.

/** Font files of each face, as data URLs; what one does not have is looked for in the next. */
export const faceFiles: Record<FaceName, readonly string[]> = {
  serif: [
    alegreyaLatin500Normal,
    alegreyaLatinExt500Normal,
    alegreyaGreek500Normal,
    alegreyaCyrillic500Normal,
    alegreyaCyrillicExt500Normal,
    alegreyaVietnamese500Normal,
  ],
  italic: [
    alegreyaLatin400Italic,
    alegreyaLatinExt400Italic,
    alegreyaGreek400Italic,
    alegreyaCyrillic400Italic,
    alegreyaCyrillicExt400Italic,
    alegreyaVietnamese400Italic,
  ],
  // Greek and Cyrillic captions borrow the serif.
  sans: [
    instrumentSansLatin400Normal,
    instrumentSansLatinExt400Normal,
    alegreyaGreek500Normal,
    alegreyaCyrillic500Normal,
    alegreyaCyrillicExt500Normal,
    alegreyaVietnamese500Normal,
  ],
};
