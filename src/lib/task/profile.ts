/**
 * The scanner profile: everything about scanner, screen, sound and buttons that a task is planned and run with.
 * Its hash stands in every bundle and log. Every field has a default, so that a lab can start with nothing known.
 */
import { z } from 'zod';
import { fingerSchema } from './schema';

const seconds = z.number().finite().min(0).max(3600);
const metres = z.number().finite().gt(0).max(20);
const pixels = z.number().int().min(1).max(20_000);
/** A physical key as the browser names it (`KeyboardEvent.code`), learned by pressing. */
const keyCode = z.string().regex(/^[A-Za-z0-9]{1,30}$/, "a key's code, learned by pressing it");
const measured = (what: z.ZodNumber) =>
  z.strictObject({ seconds: what, date: z.iso.date().nullable() }).default({ seconds: 0, date: null });

export const profileSchema = z.strictObject({
  name: z.string().min(1, 'a name is needed').max(120),
  /** Seconds. */
  tr: z.number().finite().gt(0, 'TR must be more than 0 s').max(60, 'TR is at most 60 s').default(2),
  volumes: z.number().int().min(1).max(20_000).default(200),
  pulses: z
    .strictObject({
      mode: z.enum(['once', 'every-volume', 'several-per-volume']),
      perVolume: z.number().int().min(1).max(500)
    })
    .default({ mode: 'every-volume', perVolume: 1 }),
  /** Volumes acquired with a pulse before the first stored volume (dummies that send pulses). */
  pulsesBeforeZero: z.number().int().min(0).max(100).default(0),
  /** Dummies without a pulse; nothing is scheduled because of them. */
  silentDummies: z.number().int().min(0).max(100).default(0),
  /** Acquisition time within a TR, seconds; null: all of the TR. */
  acquisitionTime: z.number().gt(0).max(60).nullable().default(null),
  /** Where acquisition begins within the TR, seconds. */
  acquisitionStart: seconds.default(0),
  /** Part of TA that a volume's model time is taken at. */
  sliceReference: z.number().min(0).max(1).default(0.5),
  triggerKey: keyCode.default('Digit5'),
  responseKeys: z
    .array(z.strictObject({ code: keyCode, finger: fingerSchema }))
    .max(10)
    .default([
      { code: 'Digit1', finger: 'right-index' },
      { code: 'Digit2', finger: 'right-middle' },
      { code: 'Digit3', finger: 'right-ring' },
      { code: 'Digit4', finger: 'right-little' }
    ]),
  screen: z
    .strictObject({
      /** Eye to screen by way of the mirror, metres. */
      distance: metres,
      /** Visible width and height, metres. */
      width: metres,
      height: metres,
      resolution: z.strictObject({ width: pixels, height: pixels }),
      /** Hertz. */
      refreshRate: z.number().gt(0).max(1000),
      flipX: z.boolean(),
      flipY: z.boolean(),
      background: z.string().regex(/^#[0-9a-f]{6}$/i)
    })
    .default({
      distance: 1.2,
      width: 0.6,
      height: 0.3375,
      resolution: { width: 1920, height: 1080 },
      refreshRate: 60,
      flipX: false,
      flipY: false,
      background: '#000000'
    }),
  displayDelay: measured(seconds.max(1)),
  soundDelay: measured(seconds.max(1)),
  deviceDelay: measured(seconds.max(1)),
  /** Loudest level a tone may be played at, dB full scale. */
  soundLevel: z.number().min(-90).max(0).default(-20),
  whenPulsesStop: z.enum(['go-on', 'end-as-partial']).default('go-on')
});
export type Profile = z.infer<typeof profileSchema>;
/** A profile with every field at its default. */
export const defaultProfile = (name = 'New scanner'): Profile => profileSchema.parse({ name });
