import { noticeStore, putAwayNotice } from '../state/noticeStore.ts';
import { useStore } from '../state/store.ts';

export function Notices() {
  const notices = useStore(noticeStore);
  return (
    <div className="notices" role="status" aria-live="polite">
      {notices.map((notice) => (
        <div className="notice" key={notice.id}>
          <span>{notice.text}</span>
          {notice.action && (
            <button
              type="button"
              className="plain-button"
              onClick={() => {
                notice.action?.run();
                putAwayNotice(notice.id);
              }}
            >
              {notice.action.label}
            </button>
          )}
          <button type="button" className="plain-button" onClick={() => putAwayNotice(notice.id)}>
            Put away<span className="unseen"> this notice</span>
          </button>
        </div>
      ))}
    </div>
  );
}
