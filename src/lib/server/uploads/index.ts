export { finishSchema, finishUpload } from './finish';
export { cleanUploads } from './store';
export { answerTus } from './tus';
