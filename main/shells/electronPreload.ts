import { contextBridge, ipcRenderer, webUtils } from 'electron';
import type { DesktopBridge } from '../host/api/desktopBridge.ts';

// A page cannot make a File that has a path, only the system's drag and drop can: what arrives here was chosen.
const bridge: DesktopBridge = {
  async pathOfDropped(file) {
    const path = webUtils.getPathForFile(file);
    if (!path) return null;
    await ipcRenderer.invoke('oxgall:dropped', path);
    return path;
  },
};

contextBridge.exposeInMainWorld('oxgallDesktop', bridge);
