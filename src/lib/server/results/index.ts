export { runEdges } from './edges';
export { edgesJson } from './export-edges';
export { findFinishedRun, finishedRuns } from './find-run';
export { loadResult, pairValues, plannedCorrection } from './load-result';
export { contrastStage } from './stage';
