import { describe, expect, it } from 'vitest';
import { writeInto, type OutFile } from '$lib/player/render/save';

/** The little of a folder handle that saving uses, kept in a map. */
function folderWith(content: Record<string, string>) {
  const files = new Map(Object.entries(content));
  const handle = {
    async getFileHandle(name: string, options?: { create?: boolean }) {
      if (!files.has(name)) {
        if (!options?.create) throw new DOMException('no such file', 'NotFoundError');
        files.set(name, '');
      }
      return {
        getFile: async () => ({ text: async () => files.get(name) ?? '' }),
        createWritable: async () => ({
          write: async (text: string) => void files.set(name, text),
          close: async () => {}
        })
      };
    }
  };
  return { files, folder: handle as unknown as FileSystemDirectoryHandle };
}

const file = (name: string, text: string): OutFile => ({ name, text, mime: 'text/plain' });
const run = [file('run_log.jsonl', 'new log'), file('run_events.tsv', 'new events')];

describe('saving a run to a folder', () => {
  it('writes every file, and the same run again', async () => {
    const { files, folder } = folderWith({ other: 'stays' });
    await writeInto(folder, run);
    await writeInto(folder, run);
    expect(Object.fromEntries(files)).toEqual({
      other: 'stays',
      'run_log.jsonl': 'new log',
      'run_events.tsv': 'new events'
    });
  });

  it('never writes over another run, nor half of this one beside it', async () => {
    const before = { 'run_events.tsv': 'events of an earlier run' };
    const { files, folder } = folderWith(before);
    await expect(writeInto(folder, run)).rejects.toThrow('run_events.tsv is in that folder already');
    expect(Object.fromEntries(files)).toEqual(before);
  });

  it('passes on what the folder refuses', async () => {
    const { folder } = folderWith({});
    folder.getFileHandle = () => Promise.reject(new DOMException('not allowed', 'NotAllowedError'));
    await expect(writeInto(folder, run)).rejects.toThrow('not allowed');
  });
});
