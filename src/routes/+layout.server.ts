export function load({ locals }) {
  return { theme: locals.theme };
}
