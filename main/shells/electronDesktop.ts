import { join } from 'node:path';
import type { BrowserWindow, Dialog, FileFilter, Shell } from 'electron';
import type { OutputFormatName } from '../host/api/hostCommands.ts';
import type { Desktop } from '../host/hostParts.ts';

const photoFilter: FileFilter = {
  name: 'Photographs',
  extensions: ['jpg', 'jpeg', 'png', 'tif', 'tiff', 'webp', 'avif', 'gif'],
};

const openFilters: Partial<Record<string, FileFilter[]>> = {
  photo: [photoFilter],
  profile: [{ name: 'Colour profiles', extensions: ['icc', 'icm'] }],
};

const saveFilters: Record<OutputFormatName, FileFilter> = {
  jpeg: { name: 'JPEG', extensions: ['jpg', 'jpeg'] },
  png: { name: 'PNG', extensions: ['png'] },
  tiff: { name: 'TIFF', extensions: ['tif', 'tiff'] },
  webp: { name: 'WebP', extensions: ['webp'] },
};

/**
 * The system's own dialogs. They run here and not in the page, so that what the user chose reaches the host
 * without passing through the page's hands.
 */
export function electronDesktop(
  dialog: Dialog,
  shell: Shell,
  currentWindow: () => BrowserWindow | null,
): Desktop {
  return {
    capabilities: { fileDialogs: true, droppedPaths: true, revealFiles: true, menu: true },
    async choose({ kind, folder, name, format }) {
      const window = currentWindow();
      if (!window) return null;
      if (kind === 'save') {
        const { canceled, filePath } = await dialog.showSaveDialog(window, {
          defaultPath: folder ? join(folder, name ?? '') : name,
          filters: format ? [saveFilters[format]] : Object.values(saveFilters),
          properties: ['createDirectory', 'showOverwriteConfirmation'],
        });
        return canceled || !filePath ? null : filePath;
      }
      const { canceled, filePaths } = await dialog.showOpenDialog(window, {
        filters: openFilters[kind],
        properties: kind === 'folder' ? ['openDirectory'] : ['openFile'],
      });
      return canceled ? null : (filePaths[0] ?? null);
    },
    async reveal(path) {
      shell.showItemInFolder(path);
    },
  };
}
