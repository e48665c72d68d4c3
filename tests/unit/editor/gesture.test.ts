import { describe, expect, it } from 'vitest';
import { beginGesture } from '../../../src/lib/editor/page/gesture';
import { newDocument } from '../../../src/lib/task/create';
import type { Edit } from '../../../src/lib/task/commands';

const document = newDocument({ title: 'Tide', label: 'tide', tr: 1_500_000, volumes: 10 });

function setUp() {
  const previews: (string | null)[] = [];
  const commits: string[] = [];
  let draw: (() => void) | null = null;
  const gesture = beginGesture<number>(
    {
      preview: (edit) => previews.push(edit?.words ?? null),
      commit: (edit) => commits.push(edit.words)
    },
    (n): Edit | null => (n === 0 ? null : { document, words: `by ${n}` }),
    (run) => {
      draw = run;
      return () => (draw = null);
    }
  );
  const frame = () => {
    const run = draw;
    draw = null;
    run?.();
  };
  return { previews, commits, gesture, frame };
}

describe('a gesture', () => {
  it('draws once a frame, the newest input only', () => {
    const { gesture, previews, frame } = setUp();
    gesture.preview(1);
    gesture.preview(2);
    gesture.preview(3);
    expect(previews).toEqual([]);
    frame();
    expect(previews).toEqual(['by 3']);
  });
  it('commits once, the newest input even when it was not drawn yet', () => {
    const { gesture, commits, previews, frame } = setUp();
    gesture.preview(1);
    frame();
    gesture.preview(5);
    gesture.commit();
    gesture.commit();
    frame();
    expect(commits).toEqual(['by 5']);
    expect(previews.at(-1)).toBeNull();
  });
  it('restores on cancel and takes nothing afterwards', () => {
    const { gesture, commits, previews, frame } = setUp();
    gesture.preview(4);
    frame();
    gesture.cancel();
    gesture.preview(6);
    frame();
    gesture.commit();
    expect(commits).toEqual([]);
    expect(previews).toEqual(['by 4', null]);
    expect(gesture.active).toBe(false);
  });
  it('makes no edit where nothing would change', () => {
    const { gesture, commits } = setUp();
    gesture.preview(0);
    gesture.commit();
    expect(commits).toEqual([]);
  });
});
