import { useCallback, useEffect, useState } from 'react';
import type { FolderListing } from '../../main/host/api/hostCommands.ts';
import { host, type Trouble, troubleOf } from '../host/host.ts';

/** The host lists only what it has shown before; asking for more would be refused. */
const offered = new Set<string>();
let lastShown: string | undefined;

interface FolderListProps {
  /** Where to start; home unless given. */
  startPath?: string;
  /** What can be chosen; with profiles no photos are shown. */
  choose: 'photo' | 'folder' | 'profile';
  onPhoto?: (path: string) => void;
  onProfile?: (path: string) => void;
  onFolder?: (listing: FolderListing) => void;
}

/** The folders and photos of this machine, where the shell has no dialog of its own. */
export function FolderList({ startPath, choose, onPhoto, onProfile, onFolder }: FolderListProps) {
  const [listing, setListing] = useState<FolderListing | null>(null);
  const [trouble, setTrouble] = useState<Trouble | null>(null);
  const show = useCallback(
    async (path?: string) => {
      try {
        const wanted = choose === 'profile' ? 'profiles' : undefined;
        const next = await host.call('listFolder', { path, wanted });
        setListing(next);
        for (const { path: known } of [next, ...next.folders, ...next.places, ...next.crumbs])
          offered.add(known);
        lastShown = next.path;
        setTrouble(null);
        onFolder?.(next);
        return true;
      } catch (error) {
        setTrouble(troubleOf(error));
        return false;
      }
    },
    [choose, onFolder],
  );
  useEffect(() => {
    const start = startPath && offered.has(startPath) ? startPath : lastShown;
    void show(start).then((isShown) => {
      if (!isShown && start) void show();
    });
  }, [show, startPath]);
  if (!listing) return <p className="folder-wait">{trouble ? trouble.message : 'Reading the folder…'}</p>;
  const photos = choose === 'profile' ? [] : listing.photos;
  const profiles = choose === 'profile' ? listing.profiles : [];
  return (
    <div className="folder">
      <nav className="folder-places" aria-label="Places">
        {listing.places.map((place) => (
          <button
            key={place.path}
            type="button"
            className="row-button"
            aria-current={place.path === listing.path ? 'location' : undefined}
            onClick={() => void show(place.path)}
          >
            {place.name}
          </button>
        ))}
      </nav>
      <div className="folder-main">
        <nav className="folder-crumbs" aria-label="Folder">
          {listing.crumbs.map((crumb, index) => (
            <span key={crumb.path}>
              {index > 0 && <span aria-hidden="true"> › </span>}
              <button
                type="button"
                className="crumb"
                aria-current={index === listing.crumbs.length - 1 ? 'page' : undefined}
                onClick={() => void show(crumb.path)}
              >
                {crumb.name}
              </button>
            </span>
          ))}
        </nav>
        {trouble && (
          <p className="fault" role="alert">
            {trouble.message} {trouble.remedy}
          </p>
        )}
        <ul className="folder-rows">
          {listing.folders.map((folder) => (
            <li key={folder.path}>
              <button type="button" className="row-button row-folder" onClick={() => void show(folder.path)}>
                {folder.name}
                <span className="row-note">folder</span>
              </button>
            </li>
          ))}
          {photos.map((photo) => (
            <li key={photo.path}>
              <button
                type="button"
                className="row-button"
                disabled={choose === 'folder'}
                onClick={() => onPhoto?.(photo.path)}
              >
                {photo.name}
                <span className="row-note">{sizeInWords(photo.sizeBytes)}</span>
              </button>
            </li>
          ))}
          {profiles.map((profile) => (
            <li key={profile.path}>
              <button type="button" className="row-button" onClick={() => onProfile?.(profile.path)}>
                {profile.name}
              </button>
            </li>
          ))}
          {listing.folders.length + photos.length + profiles.length === 0 && (
            <li className="folder-empty">
              {choose === 'profile' ? 'No colour profiles here.' : 'No photographs here.'}
            </li>
          )}
          {listing.truncated && <li className="folder-empty">There is more here than this list shows.</li>}
        </ul>
      </div>
    </div>
  );
}

export function sizeInWords(bytes: number): string {
  if (bytes < 1_000_000) return `${Math.max(1, Math.round(bytes / 1000))} kB`;
  return `${(bytes / 1_000_000).toFixed(bytes < 10_000_000 ? 1 : 0)} MB`;
}
