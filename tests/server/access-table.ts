import { engineVersion } from '$engine';
import type { Action, Member } from '$lib/server/access';
import { db } from '$lib/server/database';
import { answerTus } from '$lib/server/uploads';
import { makeFinishedRun, makeRun, type World } from './access/world';
import { validDraft } from './contrasts/valid-draft';

/** What of a request is particular to a handler. */
export interface RequestParts {
  params?: Record<string, string>;
  search?: string;
  form?: Record<string, string>;
  json?: unknown;
  body?: BodyInit;
  headers?: Record<string, string>;
}

/** Asks `allow` for this action before anything else. */
interface Guarded {
  action: Action;
  /**
   * A request about the world's things that `asker` is not refused: whoever has a role that may,
   * and the lead when the request is then sent by somebody who must be refused.
   */
  request: (world: World, asker: Member) => RequestParts | Promise<RequestParts>;
  /**
   * The same request by the lead of another team: 404, or (for handlers whose address names
   * nothing of a team) an answer about the asker's own team only.
   */
  otherTeam: 'not-found' | 'own-only';
}

/** For everybody, on purpose. */
interface Open {
  open: string;
}

export type Expectation = Guarded | Open;

const open = (reason: string): Open => ({ open: reason });

/** A handler about things named in its address, form or body. */
const guarded = (action: Action, request: Guarded['request']): Guarded => ({
  action,
  request,
  otherTeam: 'not-found',
});

/** A handler about the asker's own team or account. */
const own = (action: Action, request: Guarded['request'] = () => ({})): Guarded => ({
  action,
  request,
  otherTeam: 'own-only',
});

/**
 * One entry for each server file of src/routes, with one row for each of its handlers: `load`,
 * `actions.name`, or the HTTP method (several rows where it does several things). tests/server/access.test.ts fails for whatever is missing.
 */
export const accessTable: Record<string, Record<string, Expectation | Expectation[]>> = {
  '+layout.server.ts': { load: open('tells the chosen theme and nothing else') },
  '+page.server.ts': { load: open('sends everybody on: to the studies or to sign in') },
  'api/health/+server.ts': { GET: open('monitoring has no account; says nothing of any team') },
  'sign-out/+server.ts': { POST: open('ends the session of the cookie it came with, if any') },
  'theme/+server.ts': { POST: open('sets a cookie for light or dark') },

  '(auth)/sign-in/+page.server.ts': {
    load: open('is how people without a session get one'),
    'actions.default': open('is how people without a session get one'),
  },
  '(auth)/reset-password/+page.server.ts': {
    load: open('who forgot the password has no session'),
    'actions.default': open('answers the same whether or not the address has an account'),
  },
  '(auth)/reset-password/[token]/+page.server.ts': {
    load: open('the mailed token is the permission'),
    'actions.default': open('the mailed token is the permission'),
  },
  '(auth)/invitation/[token]/+page.server.ts': {
    load: open('the mailed token is the permission'),
    'actions.create': open('the mailed token is the permission'),
    'actions.join': open('the mailed token is the permission, with the invited account'),
  },
  '(public)/+layout.server.ts': { load: open('shows the asker who they are') },
  '(public)/mail/+page.server.ts': {
    load: open('is 404 wherever a mail could be real; see mail.test.ts'),
  },

  'team-choice/+server.ts': {
    POST: guarded('team.read', (world) => ({ form: { team: world.teamId } })),
  },
  '(app)/+layout.server.ts': { load: own('team.read') },
  '(app)/account/+page.server.ts': {
    load: own('team.read'),
    'actions.name': own('team.read', () => ({ form: { name: 'N. Ewname' } })),
    'actions.password': own('team.read', () => ({
      form: { current: 'not the password', password: 'heron ember lagoon' },
    })),
    'actions.sign-out-others': own('team.read'),
  },
  '(app)/team/+page.server.ts': {
    load: own('team.read'),
    'actions.invite': own('team.manage', () => ({
      form: { email: 'somebody@example.org', role: 'viewer' },
    })),
    'actions.resend': guarded('team.manage', invitation),
    'actions.revoke': guarded('team.manage', invitation),
    'actions.role': guarded('team.manage', ({ members }) => ({
      form: { personId: members.viewer.personId, role: 'statistician' },
    })),
    'actions.remove': guarded('team.manage', ({ members }) => ({
      form: { personId: members.viewer.personId },
    })),
  },

  '(app)/studies/+page.server.ts': {
    load: own('study.read'),
    'actions.create': own('study.write', () => ({ form: { name: 'Taps', description: '' } })),
  },
  '(app)/studies/[studyId=uuid]/+page.server.ts': {
    load: guarded('study.read', study),
    'actions.contrast': guarded('contrast.write', (world) => ({
      ...study(world),
      form: { name: 'Cued', question: 'Does the beat matter?' },
    })),
    'actions.edit': guarded('study.write', (world) => ({
      ...study(world),
      form: { name: 'Taps', description: '' },
    })),
    'actions.delete': guarded('study.write', study),
    'actions.addParticipant': guarded('study.write', (world) => ({
      ...study(world),
      form: { code: 'P77' },
    })),
    'actions.removeParticipant': guarded('study.write', (world) => ({
      ...study(world),
      form: { id: world.participantId },
    })),
  },

  '(app)/studies/[studyId=uuid]/recordings/+page.server.ts': {
    load: guarded('recording.read', study),
    'actions.delete': guarded('recording.write', (world) => ({
      ...study(world),
      form: { id: world.recording.id },
    })),
    'actions.attach': guarded('recording.write', (world) => ({
      ...study(world),
      body: sidecarForm(world),
    })),
    'actions.participants': guarded('study.write', (world) => ({
      ...study(world),
      form: { code: 'P77' },
    })),
  },

  '(app)/studies/[studyId=uuid]/recordings/[recordingId=uuid]/+page.server.ts': {
    load: guarded('recording.read', recordingPage),
    'actions.mark': guarded('recording.write', (world) => ({
      ...recordingPage(world),
      form: { site: 'C3', bad: 'true' },
    })),
    'actions.attach': guarded('recording.write', (world) => ({
      ...recordingPage(world),
      body: sidecarForm(world),
    })),
    'actions.restore': guarded('recording.write', recordingPage),
    'actions.participant': guarded('recording.write', (world) => ({
      ...recordingPage(world),
      form: { code: 'P77' },
    })),
  },

  '(app)/contrasts/[contrastId=uuid]/+layout.server.ts': { load: guarded('contrast.read', locked) },
  '(app)/contrasts/[contrastId=uuid]/+page.server.ts': { load: guarded('contrast.read', locked) },
  '(app)/contrasts/[contrastId=uuid]/define/+page.server.ts': {
    load: guarded('contrast.read', draft),
    'actions.newVersion': guarded('contrast.write', (world) => ({
      ...locked(world),
      form: { fromVersion: '1' },
    })),
    'actions.lock': guarded('plan.lock', (world) => ({
      ...draft(world),
      form: { version: '1', revision: '1' },
    })),
    'actions.discard': guarded('contrast.write', draft),
    'actions.rename': guarded('contrast.write', (world) => ({
      ...draft(world),
      form: { name: 'Free against cued' },
    })),
  },
  '(app)/contrasts/[contrastId=uuid]/run/+page.server.ts': {
    load: guarded('contrast.read', locked),
  },
  '(app)/contrasts/[contrastId=uuid]/result/+page.server.ts': {
    load: guarded('result.read', async (world) => {
      await makeFinishedRun(world);
      return locked(world);
    }),
  },

  'api/contrasts/[contrastId=uuid]/draft/+server.ts': {
    PUT: guarded('contrast.write', (world) => ({
      ...draft(world),
      json: { version: 1, basedOn: 1, draft: validDraft(world.draftedSha256) },
    })),
  },
  'api/contrasts/[contrastId=uuid]/recordings/+server.ts': {
    GET: guarded('contrast.read', (world) => ({ ...draft(world), search: '?participant=P01' })),
  },
  'api/contrasts/[contrastId=uuid]/runs/+server.ts': {
    GET: guarded('contrast.read', locked),
    POST: guarded('run.write', (world) => ({
      ...locked(world),
      json: { planHash: world.planHash, engineVersion, workerCount: 2 },
    })),
  },
  'api/recordings/[recordingId=uuid]/file/+server.ts': {
    GET: guarded('recording.download', recording),
    HEAD: guarded('recording.download', recording),
  },
  'api/runs/[runId=uuid]/+server.ts': {
    GET: guarded('contrast.read', ownRun),
    PATCH: guarded('run.write', async (world, asker) => ({
      ...(await ownRun(world, asker)),
      json: { state: 'paused' },
    })),
  },
  'api/runs/[runId=uuid]/result/+server.ts': {
    PUT: guarded('run.write', async (world, asker) => ({
      ...(await ownRun(world, asker)),
      json: summary(world),
    })),
  },
  'api/runs/[runId=uuid]/maps/[name]/+server.ts': {
    GET: guarded('result.read', async (world) => ({
      params: { runId: await makeFinishedRun(world), name: 'z' },
    })),
    PUT: guarded('run.write', async (world, asker) => {
      const { params } = await ownRun(world, asker);
      return { params: { ...params, name: 'z' }, body: new Uint8Array(256) };
    }),
  },
  'api/runs/[runId=uuid]/edges/+server.ts': { GET: guarded('result.read', finishedRun) },
  'api/runs/[runId=uuid]/pairs/+server.ts': { GET: guarded('result.read', finishedRun) },
  'api/uploads/[...path]/+server.ts': {
    POST: [
      guarded('recording.write', (world) => ({
        params: { path: '' },
        headers: uploadHeaders(world),
      })),
      guarded('recording.write', async (world, asker) => ({
        ...(await ownUpload(world, asker)),
        json: { participant: 'P01', keepIdentification: false },
      })),
    ],
    HEAD: guarded('recording.write', ownUpload),
    PATCH: guarded('recording.write', async (world, asker) => {
      const { params, headers } = await ownUpload(world, asker);
      const patch = { 'Upload-Offset': '0', 'Content-Type': 'application/offset+octet-stream' };
      return { params, headers: { ...headers, ...patch }, body: new Uint8Array(16) };
    }),
    DELETE: guarded('recording.write', ownUpload),
    OPTIONS: own('recording.write', () => ({ params: { path: '' } })),
  },
};

function study({ studyId }: World): RequestParts {
  return { params: { studyId } };
}

function draft({ draftContrastId }: World): RequestParts {
  return { params: { contrastId: draftContrastId } };
}

function locked({ contrastId }: World): RequestParts {
  return { params: { contrastId } };
}

function recording(world: World): RequestParts {
  return { params: { recordingId: world.recording.id } };
}

function recordingPage({ studyId, recording: { id } }: World): RequestParts {
  return { params: { studyId, recordingId: id } };
}

function sidecarForm({ recording: { id } }: World): FormData {
  const form = new FormData();
  form.set('id', id);
  form.set('file', new File(['onset\tduration\ttrial_type\n1\t0\ttap\n'], 'rest_events.tsv'));
  return form;
}

async function finishedRun(world: World): Promise<RequestParts> {
  return { params: { runId: await makeFinishedRun(world) } };
}

/** A run is its starter's to report on. */
async function ownRun(world: World, asker: Member) {
  return { params: { runId: await makeRun(asker, world.contrastId) } };
}

function summary({ planHash }: World) {
  const timings = { fetchS: 1, screenS: 1, phasesS: 1, pairsS: 1, concludeS: 1 };
  return {
    planHash,
    engineVersion,
    digest: 'd'.repeat(64),
    workerCount: 2,
    keptA: 10,
    keptB: 10,
    lost: [],
    maxStatistic: [1],
    clusterMass: [1],
    timings,
  };
}

const tus = { 'Tus-Resumable': '1.0.0' };

function uploadHeaders({ studyId }: World): Record<string, string> {
  const base64 = (text: string) => Buffer.from(text).toString('base64');
  const metadata = `filename ${base64('rest.edf')},studyId ${base64(studyId)}`;
  return { ...tus, 'Upload-Length': '16', 'Upload-Metadata': metadata };
}

/** An upload belongs to whoever began it. */
async function ownUpload(world: World, asker: Member) {
  const url = 'http://localhost:3000/api/uploads';
  const request = new Request(url, { method: 'POST', headers: uploadHeaders(world) });
  const response = await answerTus(db, asker, request);
  const path = response.headers.get('location')?.split('/').at(-1);
  if (!path) throw new Error(`the upload was not begun: ${response.status}`);
  return { params: { path }, headers: tus };
}

function invitation(world: World): RequestParts {
  return { form: { invitationId: world.invitationId } };
}
