/** The visible area of a profile's screen in degrees of visual angle, and what lies outside it. */
import type { Profile } from '$lib/task/profile';
import type { VisibleItem } from './stages';

type Screen = Profile['screen'];
const DEGREE = Math.PI / 180;

/** Angle of a length centred in front of the eye, degrees. */
export const angleOf = (length: number, distance: number): number =>
  (2 * Math.atan(length / 2 / distance)) / DEGREE;

/** Visible width and height, degrees. */
export const screenDegrees = (screen: Screen) => ({
  width: angleOf(screen.width, screen.distance),
  height: angleOf(screen.height, screen.distance)
});

/** Width and height of an item, degrees; a text's width is not known before it is drawn. */
export function itemExtent(item: VisibleItem): { width: number; height: number } {
  if (item.kind === 'picture') return { width: item.width, height: item.height };
  if (item.kind === 'text') return { width: 0, height: item.size };
  return { width: item.size, height: item.size };
}

/** One sentence where an item reaches over the screen's edge, else null. */
export function outsideScreen(item: VisibleItem, screen: Screen): string | null {
  const view = screenDegrees(screen);
  const { width, height } = itemExtent(item);
  const right = Math.abs(item.x) + width / 2;
  const top = Math.abs(item.y) + height / 2;
  if (right <= view.width / 2 && top <= view.height / 2) return null;
  const [reach, edge, way] =
    right > view.width / 2 ? [right, view.width / 2, 'sideways'] : [top, view.height / 2, 'up or down'];
  return `Reaches ${reach.toFixed(1)}° ${way}, but this screen ends at ${edge.toFixed(1)}°; make it smaller or move it inwards.`;
}
