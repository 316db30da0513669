/** What the Electron shell's preload puts on the page as `window.oxgallDesktop`; absent in the loopback shell. */
export interface DesktopBridge {
  /** The path of a file dropped on the window, which may be opened from then on; null where it has none. */
  pathOfDropped(file: File): Promise<string | null>;
}
