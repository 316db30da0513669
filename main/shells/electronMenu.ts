import type { MenuItemConstructorOptions } from 'electron';
import type { MenuCommand } from '../host/api/hostEvents.ts';

/**
 * The application menu. Its entries do nothing themselves: they are sent to the window, which knows what is
 * possible at the moment and has the same commands on its own surface.
 * @param send tells the window
 */
export function menuTemplate(
  platform: NodeJS.Platform,
  send: (command: MenuCommand) => void,
): MenuItemConstructorOptions[] {
  const entry = (label: string, command: MenuCommand, accelerator?: string): MenuItemConstructorOptions => ({
    label,
    accelerator,
    // The window listens to its keys itself; a menu that took them as well would act twice.
    registerAccelerator: platform === 'darwin',
    click: () => send(command),
  });
  const separator: MenuItemConstructorOptions = { type: 'separator' };
  const onMac = platform === 'darwin';
  const application: MenuItemConstructorOptions[] = onMac
    ? [{ label: 'Oxgall', submenu: [{ role: 'about' }, separator, { role: 'hide' }, { role: 'quit' }] }]
    : [];
  return [
    ...application,
    {
      label: 'Photo',
      submenu: [
        entry('Open a photo…', 'openPhoto', 'CmdOrCtrl+O'),
        entry('Open a folder…', 'openFolder', 'CmdOrCtrl+Shift+O'),
        separator,
        entry('Save the painting…', 'save', 'CmdOrCtrl+S'),
        separator,
        entry('Put the photo away', 'closePhoto', 'CmdOrCtrl+W'),
        ...(onMac ? [] : [separator, { role: 'quit', label: 'Quit' } as MenuItemConstructorOptions]),
      ],
    },
    {
      label: 'Edit',
      submenu: [
        entry('Undo', 'undo', 'CmdOrCtrl+Z'),
        entry('Redo', 'redo', 'CmdOrCtrl+Shift+Z'),
        separator,
        { role: 'cut' },
        { role: 'copy' },
        { role: 'paste' },
      ],
    },
    {
      label: 'View',
      submenu: [
        entry('Whole picture', 'zoomFit', 'CmdOrCtrl+0'),
        entry('100 %', 'zoomFull', 'CmdOrCtrl+1'),
        entry('Closer', 'zoomIn', 'CmdOrCtrl+Plus'),
        entry('Further away', 'zoomOut', 'CmdOrCtrl+-'),
        separator,
        { role: 'togglefullscreen' },
      ],
    },
    { label: 'Help', submenu: [entry('Keys', 'showKeys', 'F1')] },
  ];
}
