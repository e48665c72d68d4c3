/**
 * A scanner and a participant at the keyboard. Keys are sent as trusted input with the time they were pressed at, as
 * an operating system does: they may be delivered late on a busy machine, but their `timeStamp` is exact.
 */
import type { CDPSession, Page } from '@playwright/test';

export interface Press {
  /** ms from the first pulse. */
  at: number;
  code: string;
}

const KEYS: Record<string, { key: string; virtual: number }> = {
  ...Object.fromEntries(
    [...'0123456789'].map((digit) => [`Digit${digit}`, { key: digit, virtual: 48 + Number(digit) }])
  ),
  Space: { key: ' ', virtual: 32 }
};
const wait = (ms: number) => new Promise((done) => setTimeout(done, Math.max(0, ms)));

export class Scanner {
  readonly #session: CDPSession;
  private constructor(session: CDPSession) {
    this.#session = session;
  }
  static async beside(page: Page): Promise<Scanner> {
    return new Scanner(await page.context().newCDPSession(page));
  }

  /** One key, pressed at a moment of this machine's clock (ms) and let go 40 ms later. */
  async press(code: string, moment: number): Promise<void> {
    const { key, virtual } = KEYS[code] ?? { key: code, virtual: 0 };
    const common = { key, code, windowsVirtualKeyCode: virtual, nativeVirtualKeyCode: virtual };
    await wait(moment - Date.now());
    await this.#session.send('Input.dispatchKeyEvent', {
      ...common,
      type: 'keyDown',
      text: key.length === 1 ? key : undefined,
      timestamp: moment / 1000
    });
    await this.#session.send('Input.dispatchKeyEvent', {
      ...common,
      type: 'keyUp',
      timestamp: (moment + 40) / 1000
    });
  }

  /**
   * A scan: `count` pulses on `code`, one every `tr` ms, with the presses in between. Resolves after the last one
   * with the moment of the first pulse.
   */
  async scan(scan: { code: string; tr: number; count: number; presses?: Press[] }): Promise<number> {
    const start = Date.now() + 300;
    const pulses = Array.from({ length: scan.count }, (_, index) => ({
      at: index * scan.tr,
      code: scan.code
    }));
    const all = [...pulses, ...(scan.presses ?? [])].sort((a, b) => a.at - b.at);
    for (const { at, code } of all) await this.press(code, start + at);
    return start;
  }
}
