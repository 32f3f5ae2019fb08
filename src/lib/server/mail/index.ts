export { type KeptMail, listKeptMails } from './kept-mails';
export { mailPageIsOpen, sendMail } from './send';
