/** Heights of one line of the Page, px from its top. */
export const LINE = {
  height: 97,
  /** Top and height of the blocks; they stand on the base line. */
  blockTop: 22,
  blockHeight: 24,
  base: 46,
  /** The band of the predicted signal. */
  bandBottom: 94,
  /** Left of the line: time and volume. */
  label: 62,
  /** Right of the line: room for the scan-end mark. */
  right: 10
} as const;
