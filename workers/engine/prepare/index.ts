export { axesOf } from './axes';
export { windowSamples } from './grid';
export { planEpochs } from './plan-epochs';
