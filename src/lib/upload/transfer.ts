import { DetailedError, Upload } from 'tus-js-client';

/** Small enough for the server's request limit (BODY_SIZE_LIMIT) and a slow line's patience. */
export const chunkBytes = 4 * 1024 * 1024;

export interface Transfer {
  studyId: string;
  filename: string;
  /** What is sent: the file, or the file with its identification blanked. */
  bytes: Blob;
  /** The same for the same file and choice, so that a later visit finds the unfinished upload. */
  fingerprint: string;
  onProgress(bytesSent: number): void;
}

export interface TransferProblem {
  message: string;
  /** `gone`: the server holds nothing of it any more; it must be sent anew. */
  kind: 'connection' | 'signed-out' | 'refused' | 'gone';
}

export interface RunningTransfer {
  /** The upload's id once all bytes are there; rejects with a TransferProblem. */
  done: Promise<string>;
  pause(): Promise<void>;
  /** Gives it up here and on the server. */
  cancel(): Promise<void>;
  /** Forgets it, once its recording is stored. */
  forget(): Promise<void>;
}

/** Sends a file by the tus protocol, from where an earlier attempt with this fingerprint ended. */
export function startTransfer(transfer: Transfer): RunningTransfer {
  let upload: Upload;
  const done = new Promise<string>((resolve, reject) => {
    upload = new Upload(transfer.bytes, {
      endpoint: '/api/uploads',
      chunkSize: chunkBytes,
      retryDelays: [500, 1000, 3000, 5000, 10_000],
      metadata: { filename: transfer.filename, studyId: transfer.studyId },
      fingerprint: () => Promise.resolve(transfer.fingerprint),
      storeFingerprintForResuming: true,
      onProgress: transfer.onProgress,
      onSuccess: () => resolve(upload.url!.split('/').at(-1)!),
      onError: (reason) => reject(problemOf(reason)),
    });
    upload
      .findPreviousUploads()
      .then((previous) => {
        if (previous[0]) upload.resumeFromPreviousUpload(previous[0]);
        upload.start();
      })
      .catch((reason: unknown) => reject(problemOf(reason)));
  });
  const forget = async () => {
    const storage = upload.options.urlStorage;
    for (const { urlStorageKey } of await upload.findPreviousUploads()) {
      await storage?.removeUpload(urlStorageKey);
    }
  };
  return {
    done,
    pause: () => upload.abort(),
    cancel: async () => {
      await upload.abort(upload.url !== null).catch(() => undefined);
      await forget();
    },
    forget,
  };
}

/** Names of uploads of this study that an earlier visit left unfinished. */
export function interruptedUploads(studyId: string): string[] {
  const names = new Set<string>();
  for (let i = 0; i < localStorage.length; i++) {
    const key = localStorage.key(i)!;
    if (!key.startsWith(`tus::${fingerprintPrefix(studyId)}`)) continue;
    const kept = JSON.parse(localStorage.getItem(key)!) as { metadata?: { filename?: string } };
    if (kept.metadata?.filename) names.add(kept.metadata.filename);
  }
  return [...names];
}

/** Forgets them; what the server holds of them is cleaned after a day. */
export function forgetInterrupted(studyId: string): void {
  const keys = Array.from({ length: localStorage.length }, (_, i) => localStorage.key(i)!);
  for (const key of keys) {
    if (key.startsWith(`tus::${fingerprintPrefix(studyId)}`)) localStorage.removeItem(key);
  }
}

const fingerprintPrefix = (studyId: string) => `nullwright-${studyId}`;

export function fingerprintOf(studyId: string, file: File, keepIdentification: boolean): string {
  const kept = keepIdentification ? 'kept' : 'blanked';
  return [fingerprintPrefix(studyId), file.name, file.size, file.lastModified, kept].join('|');
}

function problemOf(reason: unknown): TransferProblem {
  const response = reason instanceof DetailedError ? reason.originalResponse : null;
  if (!response || response.getStatus() === 0 || response.getStatus() >= 500) {
    const message =
      'The connection broke. What was sent is kept; it goes on from there when the line is back.';
    return { kind: 'connection', message };
  }
  if (response.getStatus() === 401) {
    const message = 'Your session has ended. Sign in in another tab, then go on here.';
    return { kind: 'signed-out', message };
  }
  return { kind: 'refused', message: messageIn(response.getBody()) };
}

/** The message of the application's error shape. */
export function messageIn(body: string): string {
  try {
    const { message } = JSON.parse(body) as { message?: string };
    if (message) return message;
  } catch {
    // Not JSON: a proxy's page, which says nothing to a person.
  }
  return 'The server refused the upload without saying why. Try again later.';
}
