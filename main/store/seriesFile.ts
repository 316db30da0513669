import { constants } from 'node:fs';
import { access } from 'node:fs/promises';
import { join } from 'node:path';
import { documentText, openDocument } from '../../core/recipes/openDocument.ts';
import { type SeriesDocument, seriesFileName, seriesFormat } from '../../core/series/seriesDocument.ts';
import { freePath } from './freePath.ts';
import { type FileVersion, readVersioned, replaceText, UnreadableText } from './versionedFile.ts';

/** What a folder's series file says, and whether it can be saved. */
export interface LoadedSeries {
  /** Null where there is no file, or none that can be used. */
  document: SeriesDocument | null;
  version: FileVersion;
  access: 'writable' | 'readOnly';
  /** Plain sentences; usually empty. */
  remarks: string[];
}

/**
 * Reads the series file of a folder. A damaged one is left alone: the first change is saved in its place only after
 * it was put aside.
 * @throws FileError only where the folder itself cannot be read
 */
export async function loadSeries(folder: string): Promise<LoadedSeries> {
  const path = join(folder, seriesFileName);
  const mayWrite = await access(folder, constants.W_OK).then(
    () => true,
    () => false,
  );
  const accessKind: LoadedSeries['access'] = mayWrite ? 'writable' : 'readOnly';
  const notKept = mayWrite ? [] : [`${folder} cannot be written, so changes to the series are not kept.`];
  let read: Awaited<ReturnType<typeof readVersioned>>;
  try {
    read = await readVersioned(path);
  } catch (failure) {
    if (!(failure instanceof UnreadableText)) throw failure;
    const remarks = [`${path}: ${failure.problem}. ${failure.remedy}`];
    return { document: null, version: failure.version, access: accessKind, remarks };
  }
  if (!read) return { document: null, version: null, access: accessKind, remarks: notKept };
  const opened = openDocument(read.text, seriesFormat);
  const { version } = read;
  if (opened.kind === 'usable')
    return { document: opened.document, version, access: accessKind, remarks: notKept };
  if (opened.kind === 'newer')
    return { document: opened.document, version, access: 'readOnly', remarks: [opened.message] };
  return { document: null, version, access: accessKind, remarks: [`${path}: ${opened.message}`] };
}

/**
 * Saves a series beside its photos. A file that is not the one that was read, or a damaged one, is put aside first.
 * @param known the version that was read or saved last, and whether it was understood
 * @returns the new version, and where another's file was put
 * @throws FileError where it cannot be written
 */
export async function saveSeries(
  folder: string,
  document: SeriesDocument,
  known: { version: FileVersion; isUnderstood: boolean },
): Promise<{ version: FileVersion; putAside: string | null }> {
  const path = join(folder, seriesFileName);
  const onDisk = await readVersioned(path).catch((failure) => {
    if (failure instanceof UnreadableText) return { text: null, version: failure.version };
    throw failure;
  });
  const isForeign = onDisk !== null && (onDisk.version !== known.version || !known.isUnderstood);
  let putAside: string | null = null;
  if (isForeign && onDisk.text !== null) {
    putAside = await freePath(`${path}.other`);
    await replaceText(putAside, onDisk.text);
  }
  return { version: await replaceText(path, documentText(document)), putAside };
}
