/** Estimation on data: fits, tests, response shapes, averages. See README.md. */
export * from './ar1';
export * from './averaging';
export * from './contrasts';
export * from './drift';
export * from './fit';
export * from './residuals';
export * from './shape';
