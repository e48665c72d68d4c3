/** Order of trials and gaps between them: numbers about them, and ways of making them. See README.md. */
export * from './counterbalance';
export * from './de-bruijn';
export * from './euler';
export * from './field';
export * from './gaps';
export * from './m-sequence';
export * from './orders';
export * from './predictability';
export * from './report';
export * from './runs';
export * from './shuffles';
export * from './williams';
