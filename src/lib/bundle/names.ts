/** File names inside the bundle: they must survive every operating system, zip tool and event table. */

/** Names that Windows keeps for devices, whatever their ending. */
const RESERVED = /^(con|prn|aux|nul|com\d|lpt\d)(\.|$)/i;

/**
 * Letters, digits, `.`, `_` and `-` of a name, at most 60 of them; what else stood there becomes one `-`. The
 * result may be empty, and two names may come out alike: see `uniqueName`.
 */
export function plainName(name: string): string {
  const plain = name
    .normalize('NFKD')
    .replace(/\p{M}/gu, '')
    .replace(/[^A-Za-z0-9._-]+/g, '-')
    .replace(/^[.-]+|[.-]+$/g, '')
    .slice(0, 60);
  return RESERVED.test(plain) ? `file-${plain}` : plain;
}

/** `name`, or with `-2`, `-3`, … before its ending where that is taken (without regard to case). Adds it to `taken`. */
export function uniqueName(name: string, taken: Set<string>): string {
  const dot = name.lastIndexOf('.');
  const [stem, ending] = dot > 0 ? [name.slice(0, dot), name.slice(dot)] : [name, ''];
  let free = name;
  for (let count = 2; taken.has(free.toLowerCase()); count++) free = `${stem}-${count}${ending}`;
  taken.add(free.toLowerCase());
  return free;
}

const ENDINGS: Record<string, string> = {
  'image/png': '.png',
  'image/jpeg': '.jpg',
  'image/gif': '.gif',
  'image/webp': '.webp',
  'image/avif': '.avif',
  'audio/wav': '.wav',
  'audio/mpeg': '.mp3',
  'audio/ogg': '.ogg',
  'video/mp4': '.mp4',
  'video/webm': '.webm'
};

/** A stimulus's name under `stimuli/`: its own words, with the ending of its real type. */
export function stimulusName(file: string, mime: string, sha256: string): string {
  const stem = plainName(file.replace(/\.[A-Za-z0-9]{1,5}$/, '')) || `stimulus-${sha256.slice(0, 8)}`;
  return `${stem}${ENDINGS[mime] ?? '.bin'}`;
}
