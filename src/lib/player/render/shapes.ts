/** Outlines of the shapes in a box of side 1 about the origin, y down, for any canvas-like path. */
import type { SHAPES } from '$lib/task/schema';

export type ShapeName = (typeof SHAPES)[number];
type Path = Pick<CanvasRenderingContext2D, 'moveTo' | 'lineTo' | 'arc' | 'closePath'>;

const polygon = (path: Path, points: readonly (readonly [number, number])[], size: number) => {
  points.forEach(([x, y], i) => (i ? path.lineTo(x * size, y * size) : path.moveTo(x * size, y * size)));
  path.closePath();
};
const star = Array.from({ length: 10 }, (_, i): [number, number] => {
  const angle = (i * Math.PI) / 5 - Math.PI / 2;
  const radius = i % 2 ? 0.2 : 0.5;
  return [radius * Math.cos(angle), radius * Math.sin(angle)];
});
/** A hanging lantern: handle, lid, body, foot. */
const lantern: [number, number][] = [
  [-0.07, -0.5],
  [0.07, -0.5],
  [0.07, -0.4],
  [0.22, -0.32],
  [0.22, -0.26],
  [0.32, -0.12],
  [0.32, 0.2],
  [0.22, 0.36],
  [0.22, 0.5],
  [-0.22, 0.5],
  [-0.22, 0.36],
  [-0.32, 0.2],
  [-0.32, -0.12],
  [-0.22, -0.26],
  [-0.22, -0.32],
  [-0.07, -0.4]
];
const outlines: Partial<Record<ShapeName, readonly (readonly [number, number])[]>> = {
  square: [
    [-0.5, -0.5],
    [0.5, -0.5],
    [0.5, 0.5],
    [-0.5, 0.5]
  ],
  triangle: [
    [0, -0.5],
    [0.5, 0.5],
    [-0.5, 0.5]
  ],
  diamond: [
    [0, -0.5],
    [0.5, 0],
    [0, 0.5],
    [-0.5, 0]
  ],
  bar: [
    [-0.5, -0.125],
    [0.5, -0.125],
    [0.5, 0.125],
    [-0.5, 0.125]
  ],
  lantern,
  star
};

/** Traces a shape of `size` pixels into an open path; to be filled by the even-odd rule (a ring has a hole). */
export function traceShape(path: Path, shape: ShapeName, size: number): void {
  const points = outlines[shape];
  if (points) return polygon(path, points, size);
  path.moveTo(size / 2, 0);
  path.arc(0, 0, size / 2, 0, 2 * Math.PI);
  path.closePath();
  if (shape !== 'ring') return;
  path.moveTo(size * 0.32, 0);
  path.arc(0, 0, size * 0.32, 0, 2 * Math.PI);
  path.closePath();
}
