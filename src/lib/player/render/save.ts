/** Text files out of the page: into a folder the operator chooses where the browser can, else as downloads. */
export interface OutFile {
  name: string;
  text: string;
  mime: string;
}

export function download({ name, text, mime }: OutFile): void {
  const url = URL.createObjectURL(new Blob([text], { type: mime }));
  const link = document.createElement('a');
  link.href = url;
  link.download = name;
  document.body.append(link);
  link.click();
  link.remove();
  setTimeout(() => URL.revokeObjectURL(url), 60_000);
}

type PickFolder = (options: { mode: 'readwrite' }) => Promise<FileSystemDirectoryHandle>;
const picker = (): PickFolder | undefined =>
  (window as { showDirectoryPicker?: PickFolder }).showDirectoryPicker?.bind(window);

export const canSaveToFolder = (): boolean => picker() !== undefined;

/** Writes the files into a folder; false when the operator chose none. Rejects when the folder refuses them. */
export async function saveToFolder(files: readonly OutFile[]): Promise<boolean> {
  let folder: FileSystemDirectoryHandle;
  try {
    folder = await picker()!({ mode: 'readwrite' });
  } catch {
    return false;
  }
  await writeInto(folder, files);
  return true;
}

/**
 * Writes the files, or none of them where one would take the place of another run's: a bundle packed anew, or
 * another computer, counts its attempts from 1 again. The same content again is no harm. Throws a sentence.
 */
export async function writeInto(folder: FileSystemDirectoryHandle, files: readonly OutFile[]): Promise<void> {
  for (const { name, text } of files) {
    const there = await contentOf(folder, name);
    if (there !== null && there !== text)
      throw new Error(`${name} is in that folder already, with another run in it, and nothing was written`);
  }
  for (const file of files) {
    const handle = await folder.getFileHandle(file.name, { create: true });
    const stream = await handle.createWritable();
    await stream.write(file.text);
    await stream.close();
  }
}

/** Null where there is no such file, or only an empty one. */
async function contentOf(folder: FileSystemDirectoryHandle, name: string): Promise<string | null> {
  try {
    return (await (await (await folder.getFileHandle(name)).getFile()).text()) || null;
  } catch (problem) {
    if ((problem as { name?: unknown } | null)?.name === 'NotFoundError') return null;
    throw problem;
  }
}
