import type { Recent, Session } from '../../main/host/api/hostCommands.ts';
import { openPhoto } from '../app/photoWork.ts';
import { host } from '../host/host.ts';
import { dialogStore } from '../state/panelStore.ts';
import { openingStore, sessionStore } from '../state/photoStore.ts';
import { useStore } from '../state/store.ts';
import { openDemoSeries, openSeries } from '../wall/wallWork.ts';
import { OpeningSign } from './OpeningSign.tsx';

/** The title page: open a photograph, take up an earlier one, or try the demo. */
export function FirstScreen() {
  const session = useStore(sessionStore);
  const opening = useStore(openingStore);
  const isBusy = opening.path !== null;
  return (
    <main className="first">
      <div className="first-title">
        <h1>Oxgall</h1>
        <div className="first-section" aria-hidden="true">
          <span />
          <span />
          <span />
        </div>
        <p>Photographs, painted for print.</p>
        <div className="first-ways">
          <button
            type="button"
            className="ink-button ink-button-large"
            disabled={!session || isBusy}
            onClick={() => dialogStore.set('open')}
          >
            Open a photograph…
          </button>
          <button
            type="button"
            className="quiet-button"
            disabled={!session || isBusy}
            onClick={() => dialogStore.set('openFolder')}
          >
            Open a folder as a series…
          </button>
          {session?.demo.available && (
            <button
              type="button"
              className="quiet-button"
              disabled={isBusy}
              onClick={() => void openDemoSeries()}
            >
              Try the demo: <cite>{session.demo.title}</cite>, nine plates
            </button>
          )}
        </div>
        {session?.desktop.droppedPaths && (
          <p className="first-drop">Or drop a photograph anywhere on this window.</p>
        )}
        {(isBusy || opening.trouble) && <OpeningSign opening={opening} />}
      </div>
      {session && <Earlier session={session} isBusy={isBusy} />}
    </main>
  );
}

function Earlier({ session, isBusy }: { session: Session; isBusy: boolean }) {
  if (session.recents.length === 0)
    return (
      <section className="first-earlier" aria-label="Earlier photographs">
        <p className="first-none">The photographs you open will be listed here.</p>
      </section>
    );
  return (
    <section className="first-earlier" aria-labelledby="earlier-name">
      <h2 id="earlier-name">Lately worked on</h2>
      <ul>
        {session.recents.map((recent) => (
          <RecentRow key={recent.path} recent={recent} isBusy={isBusy} />
        ))}
      </ul>
    </section>
  );
}

interface RecentRowProps {
  recent: Recent;
  isBusy: boolean;
}

function RecentRow({ recent, isBusy }: RecentRowProps) {
  const isSeries = recent.frames !== undefined;
  return (
    <li className="recent">
      <button
        type="button"
        className="row-button row-recent"
        disabled={isBusy || !recent.present}
        title={recent.path}
        onClick={() => void (isSeries ? openSeries(recent.path) : openPhoto(recent.path))}
      >
        <span className="recent-name">{recent.name}</span>
        <span className="recent-where">
          <bdi>{recent.folder}</bdi>
        </span>
        <span className="row-note">
          {isSeries && `${recent.frames} frames, `}
          {recent.present ? dayInWords(recent.openedAt) : 'no longer there'}
        </span>
      </button>
      <button
        type="button"
        className="recent-forget"
        title={`Take ${recent.name} off this list; the file stays`}
        onClick={() => void forget(recent.path)}
      >
        Forget<span className="unseen"> {recent.name}</span>
      </button>
    </li>
  );
}

async function forget(path: string): Promise<void> {
  const { recents } = await host.call('forgetRecent', { path });
  sessionStore.update((session) => session && { ...session, recents });
}

function dayInWords(iso: string): string {
  const then = new Date(iso);
  const days = Math.floor((startOfDay(new Date()) - startOfDay(then)) / 86_400_000);
  if (days === 0) return 'today';
  if (days === 1) return 'yesterday';
  return then.toLocaleDateString('en-GB', { day: 'numeric', month: 'long', year: 'numeric' });
}

function startOfDay(date: Date): number {
  return new Date(date.getFullYear(), date.getMonth(), date.getDate()).getTime();
}
