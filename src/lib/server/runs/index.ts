export { answerRefusal } from './answer-refusal';
export { expectationOf, lockedPlan, type Expectation, type LockedPlan } from './context';
export { openMap, openSlices } from './kept-maps';
export { readIndices, receiveMap } from './receive-map';
export { changeRun, createRun, getRun, listRuns, type Run } from './runs';
export { finishRun, storeResult } from './store-result';
export { runPage, type RunPage, type RunSize } from './run-page';
