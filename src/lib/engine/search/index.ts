/** The timing search: rules, problem, search, scoring. See README.md. */
export { checkRules, type RulesCheck, type SearchRules } from './rules';
export type { ModelledPart, PlacedEvent, SearchProblem } from './problem';
export { eventsOf, scoreEvents, type Score } from './score';
export { Search, type Candidate, type Progress, type SearchOptions } from './search';
