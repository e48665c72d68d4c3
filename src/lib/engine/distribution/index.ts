/** Tails, densities and critical values of the distributions that tests and power need. */
export * from './beta';
export * from './fisher';
export * from './noncentral-t';
export * from './normal';
export * from './student';
