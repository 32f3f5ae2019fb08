export { axesOf } from './axes';
export { windowSamples } from './grid';
export { planEpochs } from './plan-epochs';
export { epochReader, type EpochReader, type RecordingSource } from './read-epoch';
export { screenEpochs } from './screen';
export { epochKey, withoutLost } from './without-lost';
