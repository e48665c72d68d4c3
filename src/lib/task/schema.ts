/**
 * The task document: what an experimenter edits, what is sealed, packed and matched to logs.
 *
 * Times are integer microseconds (`…` fields documented as µs) so that nothing is rounded on the way; sizes and
 * positions are degrees of visual angle, x to the right and y up from the centre of the screen.
 * Ids are random, made by the client, never reused and never an index.
 */
import { z } from 'zod';

export const FORMAT = 1;
/** More trials than this in one run are refused, with this number in the message. */
export const MAX_TRIALS = 5000;
export const MAX_VOLUMES = 20_000;
/** Longest run or latest onset that a document may hold: six hours, µs. */
export const MAX_MICROS = 6 * 3600 * 1_000_000;

/** Ids are used as keys of plain objects, so names that every object inherits are refused. */
const id = z
  .string()
  .regex(/^[A-Za-z0-9][A-Za-z0-9_-]{5,39}$/, 'an id of 6 to 40 letters, digits, - or _')
  .refine((text) => !(text in Object.prototype), 'an id that is not the name of an object property');
const sha256 = z.string().regex(/^[0-9a-f]{64}$/, 'a SHA-256 in hex');
const micros = z.number().int('whole microseconds').min(-MAX_MICROS).max(MAX_MICROS);
const length = micros.min(0, 'a duration is 0 or more');
const name = (max = 120) => z.string().min(1, 'a name is needed').max(max, `at most ${max} characters`);
const words = (max: number) => z.string().max(max, `at most ${max} characters`);
const degrees = z.number().finite().min(-90).max(90);
const extent = z.number().finite().gt(0, 'more than 0°').max(120);
const colour = z.string().regex(/^#[0-9a-f]{6}$/i, 'a colour as #rrggbb');

export const CONDITION_COLOURS = ['c1', 'c2', 'c3', 'c4', 'c5', 'c6', 'c7', 'c8'] as const;
export const CONDITION_PATTERNS = [
  'diagonal',
  'level',
  'dots',
  'upright',
  'lattice',
  'back-diagonal',
  'waves',
  'plain'
] as const;

export const conditionSchema = z.strictObject({
  id,
  name: name(300),
  description: words(2000).default(''),
  /** HED string; checked on export. */
  hed: words(4000).default(''),
  colour: z.enum(CONDITION_COLOURS),
  pattern: z.enum(CONDITION_PATTERNS)
});

export const contrastSchema = z.strictObject({
  id,
  name: name(),
  /** Weight by condition id; a condition not named has weight 0. */
  weights: z.record(id, z.number().finite())
});

/** What the participant may answer, by name; the finger is looked up in the profile's keys. */
export const FINGERS = [
  'right-thumb',
  'right-index',
  'right-middle',
  'right-ring',
  'right-little',
  'left-thumb',
  'left-index',
  'left-middle',
  'left-ring',
  'left-little'
] as const;
export const fingerSchema = z.enum(FINGERS);
export const responseNameSchema = z.strictObject({ id, name: name(60), finger: fingerSchema });

/** What the power of the task is reckoned from; absent until somebody says. */
export const expectedSchema = z.strictObject({
  /** Height of the response to one isolated trial, percent signal change. */
  effect: z.number().finite().gt(0, 'more than 0 %').max(100),
  /** Standard deviation of the noise of one volume, percent. */
  noise: z.number().finite().gt(0, 'more than 0 %').max(100),
  /** Standard deviation of the true effect between participants, percent. */
  between: z.number().finite().min(0).max(100),
  participants: z.number().int().min(2, 'at least two').max(10_000),
  alpha: z.number().gt(0).max(0.5),
  sides: z.union([z.literal(1), z.literal(2)]),
  /** Power wanted. */
  power: z.number().min(0.5).max(0.999)
});

export const briefSchema = z.strictObject({
  title: name(200),
  /** BIDS task label: letters and digits only. */
  label: z
    .string()
    .regex(/^[A-Za-z0-9]+$/, 'letters and digits only, as BIDS asks of a task label')
    .max(60),
  question: words(10_000),
  /** Shown to the participant before the run; `{response name}` is replaced by its finger. */
  instructions: words(10_000),
  /** TR the task is planned for, µs. */
  tr: z
    .number()
    .int('whole microseconds')
    .gt(0, 'TR must be more than 0 s')
    .max(60_000_000, 'TR is at most 60 s'),
  /** Default number of stored volumes of a new run. */
  volumes: z.number().int().min(1).max(MAX_VOLUMES),
  /** High-pass cutoff, seconds. */
  highPass: z.number().finite().min(10, 'the cutoff is at least 10 s').max(100_000),
  noise: z.strictObject({
    kind: z.literal('ar1'),
    /** Noise of scans is not negatively correlated, and a negative rho has no value at another TR. */
    rho: z.number().min(0, 'rho is 0 or more').lt(1, 'rho is less than 1'),
    /** The TR that rho belongs to, seconds. */
    rhoTr: z.number().gt(0)
  }),
  /** Scanner profile the task is planned with (a uuid of the lab's), or null for the plain defaults. */
  profile: z.uuid().nullable(),
  expected: expectedSchema.optional(),
  conditions: z.array(conditionSchema).max(100),
  contrasts: z.array(contrastSchema).max(100),
  responses: z.array(responseNameSchema).max(20)
});

const itemBase = {
  id,
  name: name(60),
  /** µs from the trial's onset. */
  onset: length,
  /** µs; 0 is a momentary item only for sounds' modelling, visible items need a frame at least. */
  duration: length,
  /** Modelled as an event of the design (and given a `trial_type` in the event table). */
  modelled: z.boolean()
};
const placed = { x: degrees, y: degrees };

export const SHAPES = ['disc', 'ring', 'square', 'triangle', 'diamond', 'bar', 'lantern', 'star'] as const;

export const textItem = z.strictObject({
  ...itemBase,
  ...placed,
  kind: z.literal('text'),
  text: words(4000),
  /** Height of a line of capitals, degrees. */
  size: extent,
  colour
});
export const pictureItem = z.strictObject({
  ...itemBase,
  ...placed,
  kind: z.literal('picture'),
  /** SHA-256 of the uploaded file, or null while none is chosen. */
  asset: sha256.nullable(),
  /** The file's own name, for people and for `stim_file`. */
  file: words(200),
  width: extent,
  height: extent
});
export const shapeItem = z.strictObject({
  ...itemBase,
  ...placed,
  kind: z.literal('shape'),
  shape: z.enum(SHAPES),
  /** Width and height, degrees. */
  size: extent,
  colour
});
export const soundItem = z.strictObject({
  ...itemBase,
  kind: z.literal('sound'),
  /** Hertz. */
  frequency: z.number().min(20).max(20_000),
  /** dB full scale. */
  level: z.number().min(-90).max(0),
  ear: z.enum(['both', 'left', 'right']),
  /** Rise and fall, µs. */
  ramp: length
});
export const fixationItem = z.strictObject({
  ...itemBase,
  ...placed,
  kind: z.literal('fixation'),
  size: extent,
  colour
});
export const itemSchema = z.discriminatedUnion('kind', [
  textItem,
  pictureItem,
  shapeItem,
  soundItem,
  fixationItem
]);

export const windowSchema = z.strictObject({
  id,
  name: name(60),
  /** µs from the trial's onset. */
  onset: length,
  duration: length,
  /** Response ids that count; empty means every named response. */
  allowed: z.array(id).max(20),
  /** The correct response's id; null where none is right or wrong. */
  correct: id.nullable(),
  take: z.enum(['first', 'last', 'all'])
});

export const cardSchema = z.strictObject({
  id,
  name: name(),
  condition: id.nullable(),
  /** µs; length of the trial. */
  duration: length,
  items: z.array(itemSchema).max(100),
  windows: z.array(windowSchema).max(20)
});

export const trialSchema = z.strictObject({
  id,
  card: id,
  /** µs from time zero; may be negative or overlap. */
  onset: micros,
  /** µs; replaces the card's duration for this trial. */
  length: length.optional(),
  row: id.optional(),
  locked: z.boolean().optional()
});

export const runSchema = z.strictObject({
  id,
  name: name(60),
  volumes: z.number().int('a whole number of volumes').min(1, 'at least one volume').max(MAX_VOLUMES),
  trials: z
    .array(trialSchema)
    .max(MAX_TRIALS, `a run holds at most ${MAX_TRIALS.toLocaleString('en')} trials`)
});

/** Stimulus lists have their place in the document; their screens come later. */
export const listSchema = z.strictObject({
  id,
  name: name(),
  columns: z.array(z.strictObject({ id, name: name(60) })).max(100),
  rows: z.array(z.strictObject({ id, cells: z.record(id, z.string().max(4000)) })).max(20_000)
});

export const documentSchema = z.strictObject({
  format: z.literal(FORMAT),
  brief: briefSchema,
  cards: z.array(cardSchema).max(500),
  lists: z.array(listSchema).max(50),
  runs: z.array(runSchema).max(50)
});

export type Condition = z.infer<typeof conditionSchema>;
export type Contrast = z.infer<typeof contrastSchema>;
export type Expected = z.infer<typeof expectedSchema>;
export type Finger = z.infer<typeof fingerSchema>;
export type ResponseName = z.infer<typeof responseNameSchema>;
export type Brief = z.infer<typeof briefSchema>;
export type Item = z.infer<typeof itemSchema>;
export type ItemKind = Item['kind'];
export type ResponseWindow = z.infer<typeof windowSchema>;
export type Card = z.infer<typeof cardSchema>;
export type Trial = z.infer<typeof trialSchema>;
export type Run = z.infer<typeof runSchema>;
export type StimulusList = z.infer<typeof listSchema>;
export type TaskDocument = z.infer<typeof documentSchema>;
