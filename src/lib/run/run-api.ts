import type { NewRun, RunChange, RunSummary } from '$lib/model/run';
import type { RunErrorCode } from './errors';
import { RunError } from './errors';

/** The page's words to the server about a run. Each rejects with a RunError. */

export async function createRun(contrastId: string, run: NewRun): Promise<string> {
  const response = await send('POST', `/api/contrasts/${contrastId}/runs`, JSON.stringify(run));
  const { id } = (await response.json()) as { id: string };
  return id;
}

export async function changeRun(runId: string, change: RunChange): Promise<void> {
  await send('PATCH', `/api/runs/${runId}`, JSON.stringify(change));
}

export async function putMap(runId: string, name: string, file: Blob): Promise<void> {
  await send('PUT', `/api/runs/${runId}/maps/${name}`, file);
}

export async function putResult(runId: string, summary: RunSummary): Promise<void> {
  await send('PUT', `/api/runs/${runId}/result`, JSON.stringify(summary));
}

/** A connection that breaks for a moment must not cost an upload. */
const pausesMs = [500, 2000, 5000];

async function send(method: string, url: string, body: string | Blob): Promise<Response> {
  for (let attempt = 0; ; attempt++) {
    try {
      const response = await fetch(url, {
        method,
        body,
        headers: {
          Accept: 'application/json',
          'Content-Type':
            typeof body === 'string' ? 'application/json' : 'application/octet-stream',
        },
      });
      if (response.ok) return response;
      if (response.status < 500 || attempt >= pausesMs.length) throw await refusalOf(response);
    } catch (thrown) {
      if (thrown instanceof RunError) throw thrown;
      if (attempt >= pausesMs.length) {
        const message = 'The server cannot be reached. Check the network, then try again.';
        throw new RunError('network', message, { cause: thrown });
      }
    }
    await new Promise((resolve) => setTimeout(resolve, pausesMs[attempt]));
  }
}

async function refusalOf(response: Response): Promise<RunError> {
  const body = (await response.json().catch(() => null)) as { message?: string } | null;
  const message = body?.message ?? `The server answered with status ${response.status}.`;
  return new RunError(codeOf(response.status), message);
}

function codeOf(status: number): RunErrorCode {
  if (status === 401) return 'signed-out';
  return status >= 500 ? 'network' : 'refused';
}
