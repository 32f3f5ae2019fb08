import type { ColumnType, Generated, GeneratedAlways, JSONColumnType } from 'kysely';
import type { Role } from '$lib/model/role';
import type { RunState } from '$lib/model/run';

/** A column the database fills in and nobody changes. */
type CreatedAt = ColumnType<Date, never, never>;

interface PersonTable {
  id: Generated<string>;
  email: string;
  name: string;
  passwordHash: string;
  createdAt: CreatedAt;
}

interface SessionTable {
  id: string;
  userId: string;
  expiresAt: Date;
}

interface TeamTable {
  id: Generated<string>;
  name: string;
  simulated: Generated<boolean>;
  createdAt: CreatedAt;
}

interface MemberTable {
  teamId: string;
  personId: string;
  role: Role;
  createdAt: CreatedAt;
}

interface InvitationTable {
  id: Generated<string>;
  teamId: string;
  email: string;
  role: Role;
  tokenHash: string;
  invitedBy: string;
  createdAt: CreatedAt;
  expiresAt: Date;
  acceptedAt: Date | null;
  revokedAt: Date | null;
}

interface PasswordResetTable {
  id: Generated<string>;
  personId: string;
  tokenHash: string;
  createdAt: CreatedAt;
  expiresAt: Date;
  usedAt: Date | null;
}

interface RateLimitTable {
  key: string;
  points: number;
  expire: number | null;
}

interface AuditEventTable {
  id: GeneratedAlways<number>;
  teamId: string;
  personId: string | null;
  action: string;
  subjectType: string;
  subjectId: string;
  detail: JSONColumnType<Record<string, unknown>>;
  createdAt: CreatedAt;
}

interface StudyTable {
  id: Generated<string>;
  teamId: string;
  name: string;
  description: Generated<string>;
  simulated: Generated<boolean>;
  createdBy: string;
  createdAt: CreatedAt;
}

interface ParticipantTable {
  id: Generated<string>;
  teamId: string;
  studyId: string;
  code: string;
  createdAt: CreatedAt;
}

interface RecordingTable {
  id: Generated<string>;
  teamId: string;
  studyId: string;
  participantId: string;
  name: string;
  sha256: string;
  contentSha256: string;
  sizeBytes: number;
  storageKey: string;
  format: 'EDF' | 'EDF+C' | 'EDF+D';
  startedAt: ColumnType<string | null, string | null, string | null>;
  durationS: number;
  recordCount: number;
  recordDurationS: number;
  segments: JSONColumnType<{ startS: number; durationS: number }[]>;
  notices: JSONColumnType<{ code: string; message: string }[]>;
  identificationKept: Generated<boolean>;
  simulated: Generated<boolean>;
  uploadedBy: string;
  createdAt: CreatedAt;
}

interface ChannelTable {
  id: Generated<string>;
  teamId: string;
  recordingId: string;
  position: number;
  label: string;
  site: string;
  type: string;
  unit: string;
  samplingRateHz: number;
  x: number | null;
  y: number | null;
  z: number | null;
  positionSource: 'label' | 'electrodes.tsv' | null;
  bad: Generated<boolean>;
}

interface EventTable {
  id: GeneratedAlways<number>;
  teamId: string;
  recordingId: string;
  onsetS: number;
  durationS: number | null;
  label: string;
  source: 'annotation' | 'events.tsv';
}

interface ContrastTable {
  id: Generated<string>;
  teamId: string;
  studyId: string;
  name: string;
  createdBy: string;
  createdAt: CreatedAt;
}

interface PlanTable {
  id: Generated<string>;
  teamId: string;
  contrastId: string;
  version: number;
  body: JSONColumnType<Record<string, unknown>>;
  hash: string | null;
  reason: string | null;
  lockedAt: Date | null;
  lockedBy: string | null;
  createdBy: string;
  createdAt: CreatedAt;
  revision: Generated<number>;
  updatedAt: ColumnType<Date, never, Date>;
  updatedBy: string | null;
}

export type { RunState };

interface RunTable {
  id: Generated<string>;
  teamId: string;
  planId: string;
  state: RunState;
  seed: string;
  engineVersion: string;
  workerCount: number;
  progress: Generated<number>;
  digest: string | null;
  facts: ColumnType<Record<string, unknown>, string | undefined, string>;
  failure: string | null;
  startedBy: string;
  startedAt: CreatedAt;
  heardAt: ColumnType<Date, never, Date>;
  finishedAt: Date | null;
}

interface NullSummaryTable {
  id: Generated<string>;
  teamId: string;
  runId: string;
  /** The correction whose maxima these are. */
  kind: string;
  surrogates: number[];
  mean: number;
  sd: number;
  criticalValue: number | null;
}

interface ClusterTable {
  id: Generated<string>;
  teamId: string;
  runId: string;
  number: number;
  siteJ: string;
  siteK: string;
  sign: -1 | 1;
  mass: number;
  size: number;
  points: number[];
  exceedances: number;
  p: number;
}

interface EdgeTable {
  id: Generated<string>;
  teamId: string;
  runId: string;
  correction: string;
  pairIndex: number;
  siteJ: string;
  siteK: string;
  fromHz: number;
  toHz: number;
  fromS: number;
  toS: number;
  peakHz: number;
  peakS: number;
  peakPoint: number;
  points: number;
  observedA: number;
  observedB: number;
  difference: number;
  z: number;
  p: number;
  pLow: number;
  pHigh: number;
  adjustedP: number;
  adjustedPLow: number | null;
  adjustedPHigh: number | null;
  lagARad: number;
  lagBRad: number;
  clusterId: string | null;
}

interface StoredMapTable {
  id: Generated<string>;
  teamId: string;
  runId: string;
  name: string;
  storageKey: string;
  sha256: string;
  sizeBytes: number;
  dtype: string;
  shape: number[];
}

/** Every table, in camelCase; the plugin in index.ts maps names to snake_case. */
export interface Database {
  person: PersonTable;
  session: SessionTable;
  team: TeamTable;
  member: MemberTable;
  invitation: InvitationTable;
  passwordReset: PasswordResetTable;
  rateLimit: RateLimitTable;
  auditEvent: AuditEventTable;
  study: StudyTable;
  participant: ParticipantTable;
  recording: RecordingTable;
  channel: ChannelTable;
  event: EventTable;
  contrast: ContrastTable;
  plan: PlanTable;
  run: RunTable;
  nullSummary: NullSummaryTable;
  cluster: ClusterTable;
  edge: EdgeTable;
  storedMap: StoredMapTable;
}
