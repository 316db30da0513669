import { createStore } from './store.ts';

/** A quiet line at the foot of the window; it goes by itself, or when put away. */
export interface Notice {
  id: number;
  text: string;
  action?: { label: string; run: () => void };
}

export const noticeStore = createStore<readonly Notice[]>([]);

let nextId = 1;
const shownForMs = 9000;

export function addNotice(text: string, action?: Notice['action']): void {
  const id = nextId++;
  noticeStore.update((notices) => [...notices.slice(-2), { id, text, action }]);
  setTimeout(() => putAwayNotice(id), shownForMs);
}

export function putAwayNotice(id: number): void {
  noticeStore.update((notices) => notices.filter((notice) => notice.id !== id));
}
