/** Every edit of a task document: pure functions that return the changed document and the edit in words. */
export * from './edit';
export * from './brief';
export * from './cards';
export * from './runs';
export * from './trials';
