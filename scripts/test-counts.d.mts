interface Count {
  passed: number;
  failed: number;
}
export function countVitest(report: unknown, code: number): Count;
export function countPlaywright(report: unknown, code: number): Count;
