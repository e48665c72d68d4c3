/**
 * Degrees of visual angle → pixels of a flat screen seen straight on. The screen's visible width fills the canvas.
 * Positions are exact (tangent), sizes are those at the screen's centre.
 */
import type { Profile } from '$lib/task/profile';

const RADIANS = Math.PI / 180;

export interface Geometry {
  width: number;
  height: number;
  /** Pixels right of the centre for `degrees`. */
  along(degrees: number): number;
  /** Pixels that an extent of `degrees`, centred straight ahead, takes. */
  extent(degrees: number): number;
}

/** `width`, `height`: canvas in pixels. */
export function screenGeometry(screen: Profile['screen'], width: number, height: number): Geometry {
  const perMetre = width / screen.width;
  const eye = screen.distance * perMetre;
  return {
    width,
    height,
    along: (degrees) => Math.tan(degrees * RADIANS) * eye,
    extent: (degrees) => 2 * Math.tan((degrees * RADIANS) / 2) * eye
  };
}
