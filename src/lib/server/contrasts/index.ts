export { createContrast, renameContrast, type Named } from './contrasts';
