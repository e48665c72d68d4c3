import {
  doubleGammaWithDerivatives,
  finiteImpulseResponse,
  sinesAndCosines,
  threeGammas,
  type ResponseBasis
} from './bases';
import { doubleGamma } from './double-gamma';
import { boynton, glover, GLOVER_MOTOR, gammaVariate } from './published';

/** A response or basis as it is offered: how it is called, where it comes from, how it is made. */
export interface ResponseKind {
  id: string;
  name: string;
  source: string;
  /** One member per column of a condition. @param tr repetition time in seconds, for bases that follow it */
  make(tr: number): ResponseBasis;
}

const FRISTON = 'Friston KJ, Josephs O, Rees G, Turner R (1998) Magn Reson Med 39:41–52';
/** Seconds that an estimated response covers. */
const WINDOW = 24;

/** The shapes and bases on offer, with their published parameters. The first is the product's own. */
export const RESPONSES: readonly ResponseKind[] = [
  { id: 'double-gamma', name: 'Double gamma', source: FRISTON, make: () => [doubleGamma()] },
  {
    id: 'double-gamma-derivatives',
    name: 'Double gamma with time and dispersion derivatives',
    source: FRISTON,
    make: () => doubleGammaWithDerivatives()
  },
  {
    id: 'glover-auditory',
    name: 'Difference of gamma variates, auditory',
    source: 'Glover GH (1999) NeuroImage 9:416–429',
    make: () => [glover()]
  },
  {
    id: 'glover-motor',
    name: 'Difference of gamma variates, motor (parameters from memory)',
    source: 'Glover GH (1999) NeuroImage 9:416–429',
    make: () => [glover(GLOVER_MOTOR)]
  },
  {
    id: 'boynton',
    name: 'Gamma density after a delay',
    source: 'Boynton GM, Engel SA, Glover GH, Heeger DJ (1996) J Neurosci 16:4207–4221',
    make: () => [boynton()]
  },
  {
    id: 'gamma-variate',
    name: 'Gamma variate',
    source: 'Cohen MS (1997) NeuroImage 6:93–103 (from memory)',
    make: () => [gammaVariate()]
  },
  {
    id: 'fir',
    name: 'Finite impulse response, 24 s at lags of one TR',
    source: 'Dale AM (1999) Hum Brain Mapp 8:109–114',
    make: (tr) => finiteImpulseResponse(Math.max(1, Math.round(WINDOW / tr)), tr)
  },
  {
    id: 'waves',
    name: 'Sines and cosines under a window, order 3, 32 s',
    source: 'Josephs O, Turner R, Friston K (1997) Hum Brain Mapp 5:243–248 (from memory)',
    make: () => sinesAndCosines({ window: 32, order: 3, isWindowed: true })
  },
  {
    id: 'three-gammas',
    name: 'Three gamma densities',
    source: 'shapes 4, 8 and 16 s; common practice',
    make: () => threeGammas()
  }
];
