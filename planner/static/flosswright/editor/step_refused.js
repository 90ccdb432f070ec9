// A step that the pattern's limits forbid; its message is for the maker.
export class StepRefused extends Error {}
