const leastLength = 12;
const leastUnguessable = 8;
const leastDistinct = 5;

// The commonest pieces of passwords, from general knowledge (no source): what a guesser tries
// first, alone or with digits behind.
const commonPieces = [
  'password', 'passwort', 'passw0rd', 'p@ssword', 'letmein', 'welcome', 'iloveyou', 'sunshine',
  'princess', 'football', 'baseball', 'superman', 'trustno1', 'dragon', 'monkey', 'master',
  'shadow', 'michael', 'changeme', 'secret', 'admin', 'login', 'qwertyuiop', 'qwertzuiop',
  'qwerty', 'qwertz', 'asdfghjkl', 'asdfgh', 'zxcvbnm', 'zxcvbn', '1q2w3e4r5t', '1q2w3e4r',
  '1qaz2wsx', 'abcdefghijkl', 'abcdefgh', 'abcdef', 'abc123', '1234567890', '0123456789',
  '123456789', '12345678', '1234567', '123456', '12345', '1234', '0987654321', '987654321',
  '654321', 'nullwright',
]; // prettier-ignore

interface Owner {
  email: string;
  name: string;
}

/** What is wrong with a new password, in words; null when nothing is. */
export function passwordProblem(password: string, owner: Owner): string | null {
  if ([...password].length < leastLength) {
    return `At least ${leastLength} characters; several words are easy to keep in mind.`;
  }
  if (new Set(password).size < leastDistinct) {
    return `At least ${leastDistinct} different characters.`;
  }
  const own = [owner.email, ...owner.email.split(/[@.]/), ...owner.name.split(/\s+/)];
  if (without(password, own).length < leastUnguessable) {
    return 'It is made from your name or mail address. Choose something that others cannot guess.';
  }
  if (without(password, [...own, ...commonPieces]).length < leastUnguessable) {
    return 'It is among the passwords that are guessed first. Choose several unrelated words.';
  }
  return null;
}

/** The password in lower case with every piece of at least three letters taken out. */
function without(password: string, pieces: string[]): string {
  const longestFirst = pieces
    .map((piece) => piece.toLowerCase())
    .filter((piece) => piece.length >= 3)
    .sort((x, y) => y.length - x.length);
  return longestFirst.reduce((left, piece) => left.replaceAll(piece, ''), password.toLowerCase());
}
