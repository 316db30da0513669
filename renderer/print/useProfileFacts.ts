import { useEffect, useState } from 'react';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { ProfileFacts } from '../../main/host/api/hostCommands.ts';
import { host, type Trouble, troubleOf } from '../host/host.ts';

interface KnownProfile {
  facts: ProfileFacts | null;
  trouble: Trouble | null;
}

const nothing: KnownProfile = { facts: null, trouble: null };

/** What the host knows of the profile that is printed for: nothing while it looks, and where nothing is converted. */
export function useProfileFacts(photoId: string, profile: OutputSettings['profile']): KnownProfile {
  const key = `${photoId}|${JSON.stringify(profile)}`;
  const [known, setKnown] = useState<KnownProfile & { key: string }>({ ...nothing, key: '' });
  useEffect(() => {
    const abort = new AbortController();
    const asked = JSON.parse(key.slice(photoId.length + 1)) as OutputSettings['profile'];
    if (asked !== 'keep')
      host.call('describeProfile', { photoId, profile: asked }, { signal: abort.signal }).then(
        (facts) => setKnown({ key, facts, trouble: null }),
        (error) => {
          if (!abort.signal.aborted) setKnown({ key, facts: null, trouble: troubleOf(error) });
        },
      );
    return () => abort.abort();
  }, [key, photoId]);
  return known.key === key ? known : nothing;
}
