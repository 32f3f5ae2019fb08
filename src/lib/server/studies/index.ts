export { studyContrasts, type ListedContrast, type Stage } from './contrasts';
export { listStudies, studySorts, type ListedStudy, type StudySort } from './list';
export {
  addParticipants,
  listParticipants,
  removeParticipant,
  type ListedParticipant,
} from './participants';
export {
  createStudy,
  getStudy,
  lockedContrasts,
  removeStudy,
  updateStudy,
  type Study,
} from './studies';
