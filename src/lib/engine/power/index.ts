/** Power of t tests in one participant and in groups. See README.md. */
export * from './curves';
export * from './group';
export * from './power';
