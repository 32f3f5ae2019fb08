import type { Consequences, Plan } from '$engine';
import { planChanges, type PlanChange } from '$lib/model/plan-changes';
import { EditHistory } from '$lib/model/edit-history';
import { checkPlan } from '$lib/model/plan-check';
import { newRule, type PlanDraft, type RuleDraft } from '$lib/model/plan-draft';
import type { PlanIssue } from '$lib/model/plan-issues';
import { draftToPlan } from '$lib/model/plan-parse';
import { recordingNames, type StudyRecording } from '$lib/model/study-recording';
import { Autosave, type SaveTarget } from './autosave.svelte';
import type { Machine } from './machine.svelte';
import { screenedEpochs } from './screened';
import { firstRules } from './first-rules';
import { goodSites, siteChoices, usedRecordings, type SiteChoice } from './site-choices';

export interface EditorStart extends SaveTarget {
  draft: PlanDraft;
  recordings: StudyRecording[];
  /** The version that this one replaces. */
  previous: Plan | null;
  editable: boolean;
}

/** Numbers follow from the rest of the form while texts that no number needs are still empty. */
function withTexts(draft: PlanDraft): PlanDraft {
  const named = <T extends { name: string }>(condition: T, name: string): T => ({
    ...condition,
    name: condition.name.trim() || name,
  });
  return {
    ...draft,
    question: draft.question.trim() || '?',
    a: named(draft.a, 'A'),
    b: named(draft.b, 'B'),
    test: { ...draft.test, seed: draft.test.seed.trim() || '?' },
  };
}

/** The form's state: the draft, what follows from it, its history and its way to the server. */
export class PlanEditor {
  draft = $state() as PlanDraft;
  recordings = $state.raw<StudyRecording[]>([]);
  /** Fields that were left once, whose emptiness may now be said. */
  readonly visited = $state<Record<string, true>>({});
  /** Locking was tried: everything that is missing is said. */
  attempted = $state(false);
  canUndo = $state(false);
  canRedo = $state(false);
  readonly save: Autosave;
  readonly editable: boolean;
  #previous: Plan | null = null;
  #machine: Machine | null = null;
  #last: Consequences | null = null;
  readonly #history: EditHistory;

  readonly names = $derived(recordingNames(this.recordings));
  readonly #parsed = $derived(draftToPlan(this.draft, this.names));
  readonly plan = $derived<Plan | null>(this.#parsed.plan);
  /** A plan for the numbers beside the form; its texts may be stand-ins. */
  readonly countable = $derived(draftToPlan(withTexts(this.draft), this.names).plan);
  /** Epochs that the limits in µV leave out; null while they are not counted. */
  readonly amplitude = $derived(this.#machine?.lostOf(this.countable) ?? null);
  readonly #screened = $derived(
    this.countable ? screenedEpochs(this.countable, this.recordings, this.amplitude) : null,
  );
  /** The limits in µV are in the counts. */
  readonly screened = $derived(this.#screened !== null);
  readonly #check = $derived(
    this.countable ? checkPlan(this.countable, this.recordings, this.#screened ?? undefined) : null,
  );
  readonly consequences = $derived<Consequences | null>(this.#check?.consequences ?? null);
  /** The last numbers that could be counted: the page keeps its shape while a field is retyped. */
  readonly lastConsequences = $derived.by(() => {
    if (this.consequences) this.#last = this.consequences;
    return this.#last;
  });
  readonly issues = $derived<PlanIssue[]>([...this.#parsed.issues, ...(this.#check?.issues ?? [])]);
  readonly sites = $derived<SiteChoice[]>(siteChoices(usedRecordings(this.draft, this.recordings)));
  readonly changes = $derived<PlanChange[]>(
    this.#previous && this.plan ? planChanges(this.#previous, this.plan) : [],
  );

  constructor(start: EditorStart, machine: Machine) {
    this.#machine = machine;
    this.draft = start.draft;
    this.recordings = start.recordings;
    this.editable = start.editable;
    this.#previous = start.previous;
    this.#history = new EditHistory(JSON.stringify(start.draft));
    this.save = new Autosave(start);
  }

  /** What to say beside a field: wrong at once, missing only once it is due. */
  errors(field: string): string[] {
    const due = this.attempted || this.visited[field];
    return this.issues
      .filter((issue) => issue.field === field && (due || !issue.missing))
      .map((issue) => issue.message);
  }

  /** To be called in an effect: any change of the draft becomes history and is saved. */
  track(): void {
    const text = JSON.stringify(this.draft);
    if (!this.editable || !this.#history.edit(text, Date.now())) return;
    this.#noteSteps();
    this.save.note($state.snapshot(this.draft));
  }

  undo(): void {
    this.#show(this.#history.undo());
  }

  redo(): void {
    this.#show(this.#history.redo());
  }

  /** Replaces the whole draft as one step that can be undone. */
  bringBack(draft: PlanDraft): void {
    const text = JSON.stringify(draft);
    this.#history.replace(text);
    this.#show(text);
  }

  /** Somebody else's newer draft takes the place of this one, which undo brings back. */
  takeTheirs(): void {
    const theirs = this.save.newer?.draft;
    if (!theirs) return;
    this.save.settle(theirs, false);
    this.#history.replace(JSON.stringify(theirs));
    this.draft = theirs;
    this.#noteSteps();
  }

  /** This draft replaces the newer one, which undo brings back. */
  keepMine(): void {
    const theirs = this.save.newer?.draft;
    if (!theirs) return;
    const mine = $state.snapshot(this.draft);
    this.#history.replace(JSON.stringify(theirs));
    this.#history.replace(JSON.stringify(mine));
    this.#noteSteps();
    this.save.settle(mine, true);
  }

  /** Another participant: rules of the old one's recordings make no sense any more. */
  chooseParticipant(code: string, recordings: StudyRecording[]): void {
    this.recordings = recordings;
    this.draft.participant = code;
    [this.draft.a.rules, this.draft.b.rules] = firstRules(recordings);
    const kept = this.draft.sites.filter((site) => this.sites.some((each) => each.site === site));
    this.draft.sites = kept.length >= 2 ? kept : goodSites(this.sites);
  }

  /** Leaves an epoch out by hand, or takes the mark back. */
  mark(epoch: { recording: string; onsetS: number }, out: boolean): void {
    const { recording, onsetS } = epoch;
    const others = this.draft.epoch.byHand.filter(
      (each) => each.recording !== recording || each.onsetS !== onsetS,
    );
    this.draft.epoch.byHand = out ? [...others, { recording, onsetS }] : others;
  }

  addRule(condition: 'a' | 'b', kind: RuleDraft['kind']): void {
    const last = this.draft[condition].rules.at(-1)?.recording;
    const recording = this.recordings.find((each) => each.sha256 === last) ?? this.recordings[0];
    const rule = newRule(kind, recording?.sha256 ?? '');
    if (recording) rule.toS = String(Math.floor(recording.durationS));
    this.draft[condition].rules.push(rule);
  }

  removeRule(condition: 'a' | 'b', index: number): void {
    this.draft[condition].rules.splice(index, 1);
  }

  #show(text: string | null): void {
    if (text === null) return;
    this.draft = JSON.parse(text) as PlanDraft;
    this.#noteSteps();
    this.save.note($state.snapshot(this.draft));
  }

  #noteSteps(): void {
    this.canUndo = this.#history.canUndo;
    this.canRedo = this.#history.canRedo;
  }
}
