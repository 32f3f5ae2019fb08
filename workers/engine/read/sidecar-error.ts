/** A sidecar that cannot be used; says where, what was found, and what to do. */
export class SidecarError extends Error {
  override readonly name = 'SidecarError';

  constructor(
    readonly file: string,
    /** From 1; the header is line 1. */
    readonly line: number,
    readonly column: string | null,
    readonly value: string | null,
    problem: string,
    readonly remedy: string,
  ) {
    const place = column === null ? `line ${line}` : `line ${line}, column "${column}"`;
    const found = value === null ? '' : `${JSON.stringify(value)} `;
    super(`${file}, ${place}: ${found}${problem}. ${remedy}`);
  }
}
