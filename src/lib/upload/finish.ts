import type { SidecarKind } from '$lib/model/bids-names';
import { messageIn, type TransferProblem } from './transfer';

export type Finished =
  | { kind: 'stored'; id: string; name: string; notices: { code: string; message: string }[] }
  | { kind: 'duplicate'; id: string; name: string; participant: string };

/** Asks the server to make a recording of a complete upload. Throws a TransferProblem. */
export async function finishUpload(
  uploadId: string,
  request: {
    participant: string;
    keepIdentification: boolean;
    sidecars: Partial<Record<SidecarKind, { name: string; text: string }>>;
  },
): Promise<Finished> {
  const response = await fetch(`/api/uploads/${uploadId}`, {
    method: 'POST',
    headers: { 'Content-Type': 'application/json', Accept: 'application/json' },
    body: JSON.stringify(request),
  }).catch(() => null);
  if (response?.ok) return (await response.json()) as Finished;
  if (!response || response.status >= 500) {
    const message =
      'All bytes are there, but the server did not answer. Go on to ask it again; nothing is sent twice.';
    throw { kind: 'connection', message } satisfies TransferProblem;
  }
  if (response.status === 401) {
    const message = 'Your session has ended. Sign in in another tab, then go on here.';
    throw { kind: 'signed-out', message } satisfies TransferProblem;
  }
  const refusal = (await response
    .clone()
    .json()
    .catch(() => null)) as { code?: string } | null;
  const isGone = response.status === 404 || refusal?.code === 'unreadable';
  throw {
    kind: isGone ? 'gone' : 'refused',
    message: messageIn(await response.text()),
  } satisfies TransferProblem;
}
