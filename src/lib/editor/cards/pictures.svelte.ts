import { SvelteMap } from 'svelte/reactivity';
import { assetUrl } from './assets';

type Picture = { state: 'loading' } | { state: 'ready'; image: ImageBitmap } | { state: 'missing' };

/** Pictures of a lab as the stages need them: fetched once, decoded once, drawn many times. */
class Pictures {
  #kept = new SvelteMap<string, Picture>();

  /** Starts fetching what is not there yet. Call from an effect, not while drawing. */
  want(lab: string, sha256: string): void {
    const key = `${lab}/${sha256}`;
    if (this.#kept.has(key)) return;
    this.#kept.set(key, { state: 'loading' });
    fetch(assetUrl(lab, sha256))
      .then(async (response) => {
        if (!response.ok) throw new Error(String(response.status));
        this.#kept.set(key, { state: 'ready', image: await createImageBitmap(await response.blob()) });
      })
      .catch(() => this.#kept.set(key, { state: 'missing' }));
  }

  of(lab: string, sha256: string | null): Picture {
    if (sha256 === null) return { state: 'missing' };
    return this.#kept.get(`${lab}/${sha256}`) ?? { state: 'loading' };
  }
}

export const pictures = new Pictures();
