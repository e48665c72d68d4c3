import { describe, expect, it } from 'vitest';
import { checkNumber, checkText, showMinutes, showNumber } from '../../../../src/lib/editor/forms/numbers';

const tr = { name: 'TR', unit: 's', moreThan: 0, max: 60, example: 1.5 };
const words = (text: string, rule = tr as Parameters<typeof checkNumber>[1]) => {
  const checked = checkNumber(text, rule);
  return checked.ok ? checked.value : checked.message;
};

describe('a number typed into a field', () => {
  it('takes plain numbers, a decimal comma and a true minus', () => {
    expect(words('1.5')).toBe(1.5);
    expect(words(' 1,5 ')).toBe(1.5);
    expect(words('.735')).toBe(0.735);
    expect(words('−0.5', { name: 'x' })).toBe(-0.5);
    expect(words('2e-1', { name: 'x' })).toBe(0.2);
  });

  it('refuses a TR of 0, a negative one and text, with value, expectation and way out', () => {
    expect(words('0')).toBe('TR is 0 s, but must be more than 0 s. Type for example 1.5.');
    expect(words('-2')).toBe('TR is -2 s, but must be more than 0 s. Type for example 1.5.');
    expect(words('fast')).toBe('‘fast’ is not a number; TR is a number in s. Type for example 1.5.');
    expect(words('')).toBe('TR is empty; a number in s is needed. Type for example 1.5.');
    expect(words('61')).toBe('TR is 61 s, but must be at most 60 s. Type for example 1.5.');
  });

  it('guesses nothing from half a number', () => {
    for (const text of ['1.5s', '1.5.2', '1,000.5', '0x10', 'NaN', 'Infinity', '--1', '1e999']) {
      expect(typeof words(text, { name: 'x' }), text).toBe('string');
    }
  });

  it('holds whole numbers, bounds and optional fields', () => {
    const volumes = { name: 'Volumes', min: 1, max: 20_000, whole: true };
    expect(words('300', volumes)).toBe(300);
    expect(words('1.5', volumes)).toBe('Volumes is 1.5, but must be a whole number.');
    expect(words('0', volumes)).toBe('Volumes is 0, but must be 1 or more.');
    expect(words('1', { name: 'rho', lessThan: 1 })).toBe('rho is 1, but must be less than 1.');
    expect(words('', { name: 'TA', optional: true })).toBe(null);
  });

  it('shows to the microsecond and reads its own text back', () => {
    expect(showNumber(0.1 + 0.2)).toBe('0.3');
    expect(showNumber(null)).toBe('');
    expect(showNumber(2.250001)).toBe('2.250001');
    expect(showMinutes(450)).toBe('7:30');
    expect(showMinutes(61.25)).toBe('1:01.25');
    expect(showMinutes(59.9996)).toBe('1:00');
  });
});

describe('a text typed into a field', () => {
  it('refuses what is empty, too long or of another form', () => {
    const label = {
      name: 'Task label',
      required: true,
      max: 5,
      pattern: /^[A-Za-z0-9]+$/,
      patternWords: 'letters and digits only'
    };
    expect(checkText('', label)).toEqual({ ok: false, message: 'Task label is empty; type a few words.' });
    expect(checkText('a-b', label)).toEqual({
      ok: false,
      message: 'Task label is ‘a-b’, but must be letters and digits only.'
    });
    expect(checkText('abcdefg', label)).toMatchObject({
      ok: false,
      message: expect.stringContaining('shorten it by 2')
    });
    expect(checkText('chime', label)).toEqual({ ok: true, value: 'chime' });
  });

  it('leaves quotes, tags, emoji and right-to-left text as they are', () => {
    const text = `"quoted" </script> 🏮 فانوس`;
    expect(checkText(text, { name: 'Title', max: 200 })).toEqual({ ok: true, value: text });
  });
});
