/** Made-up scans with known truth. See README.md. */
export * from './monte-carlo';
export * from './noise';
export * from './scan';
