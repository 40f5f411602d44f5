import { defineStore } from 'pinia';
import { ref, shallowRef } from 'vue';
import type { PhoneAnswer } from '../../shared/contracts/phones.ts';
import type { FieldRound, RoundSummary, WalkStop } from '../../shared/contracts/rounds.ts';
import type { StopVine } from '../../shared/field/walkState.ts';
import { http } from '../lib/http.ts';
import { unlessOffline, unlessRefused } from '../lib/unlessOffline.ts';
import { bagsOfPerson, sendBags } from '../offline/bagBox.ts';
import { addClosing, closingsOf, dropClosing, sendClosings } from '../offline/closings.ts';
import { deviceId } from '../offline/deviceId.ts';
import { orNothing, unlessStoreFails, type Entry, type KeptBag, type KeptPhoto } from '../offline/fieldDatabase.ts';
import { dropOtherRounds, keepList, keepRound, keptList, keptRound } from '../offline/keptRounds.ts';
import { emptyPhone } from '../offline/emptyPhone.ts';
import { addEntries, allEntries, entriesOfRound, sendForOthers, sendWaiting, setAside, takeBack, waitingOfOthers } from '../offline/outbox.ts';
import { findingEntry, photoEntry, pickEntry, readingEntry, type Found, type Typed } from '../offline/newEntry.ts';
import { patienceMs } from '../offline/patience.ts';
import { addPhoto, allPhotos, sendPhotos } from '../offline/photoBox.ts';
import { pruneReceived } from '../offline/prune.ts';
import { tellOtherTabs, whenAnotherTabWrites } from '../offline/tabs.ts';
import { besideOfOthers, totalWaiting } from '../offline/waiting.ts';

interface Owner {
  estateId: string;
  personId: string;
}

/** The crew's day: what is kept on the phone, what was typed, what was received. Works the same with and without signal. */
export const useFieldStore = defineStore('field', () => {
  const rounds = shallowRef<readonly RoundSummary[]>([]);
  const listedAt = ref<string | null>(null);
  const round = shallowRef<FieldRound | null>(null);
  const entries = shallowRef<readonly Entry[]>([]);
  const all = shallowRef<readonly Entry[]>([]);
  const waiting = ref(0);
  const others = ref(0);
  /** Bags and photos of others, which only they can send. */
  const othersBeside = ref(0);
  /** What lies on the phone has been looked at; before that nothing is said of it. */
  const isCounted = ref(false);
  /** The phone's store could not be opened just now, as on a full phone: what was typed before is there and cannot be shown. */
  const isUnreadable = ref(false);
  const isSending = ref(false);
  const photos = shallowRef<readonly KeptPhoto[]>([]);
  const bags = shallowRef<readonly KeptBag[]>([]);
  /** Rounds that were closed on this phone and of which the office does not know yet. */
  const closedHere = shallowRef<ReadonlySet<string>>(new Set());
  /** This phone was reported lost and emptied; how much stays on it because the office has not taken it. Null before that. */
  const emptied = ref<number | null>(null);
  const isReady = ref<boolean | null>(null);
  let owner: Owner = { estateId: '', personId: '' };
  /** Typed and on its way into the phone's store: shown at the tap, so that the next tap is about the next vine. */
  const writing = new Map<string, Entry>();
  let checkedIn = { state: '', at: 0 };

  async function begin(estateId: string, personId: string): Promise<void> {
    owner = { estateId, personId };
    await count();
  }

  async function count(): Promise<void> {
    const { personId } = owner;
    const held = await orNothing(Promise.all([totalWaiting(personId), waitingOfOthers(personId), allEntries(personId), allPhotos(personId), bagsOfPerson(personId), closingsOf(personId), besideOfOthers(personId)]), null);
    // A store that cannot be read holds nothing that could be counted; the screens say so.
    isUnreadable.value = held === null;
    if (held === null) return;
    const [mine, theirs, listed, taken, closed, closings, beside] = held;
    // All at once: a count that runs ahead of its list would say that nothing waits beside what still does.
    [waiting.value, others.value, othersBeside.value, all.value, photos.value, bags.value] = [mine, theirs, beside, listed, taken, closed];
    closedHere.value = new Set(closings.map(({ roundId }) => roundId));
    isCounted.value = true;
    if (round.value) await show(round.value.id);
  }

  whenAnotherTabWrites(() => void count());

  async function show(roundId: string): Promise<void> {
    // A store that cannot be read just now still holds what it confirmed.
    const stored = await orNothing(entriesOfRound(owner.personId, roundId), entries.value.filter((entry) => entry.roundId === roundId && !writing.has(entry.id)));
    const isStored = new Set(stored.map(({ id }) => id));
    entries.value = [...stored, ...[...writing.values()].filter((entry) => entry.roundId === roundId && !isStored.has(entry.id))];
  }

  /** What the phone holds of the day's work: there at once, whatever the network does. */
  async function recallWork(): Promise<void> {
    const kept = await orNothing(keptList(owner), null);
    if (kept) [rounds.value, listedAt.value] = [kept.items, kept.at];
  }

  /** Puts a round on the phone. Where there is no room the readiness test says so, the work is not acknowledged, and the walk goes on from memory. */
  const isHeld = (full: FieldRound): Promise<boolean> => keepRound(owner, full, new Date()).then(() => true, () => false);

  const fetchRound = (roundId: string, unless = unlessOffline) => unless(() => http.get<FieldRound>(`/api/estates/${owner.estateId}/rounds/${roundId}`, { withinMs: patienceMs }));

  /** When the server answers, the newest, with each round of one's own put on the phone. */
  async function loadWork(): Promise<void> {
    const fresh = await unlessOffline(() => http.get<{ items: RoundSummary[] }>(`/api/estates/${owner.estateId}/rounds`, { withinMs: patienceMs }));
    if (!fresh) return;
    const mine = fresh.items.filter(({ isMine, state, people }) => isMine && (state === 'sent' || state === 'open') && !people.some(({ id, finishedAt }) => id === owner.personId && finishedAt !== null));
    // What there is to do shows at once; each round may be started as soon as it is on the phone.
    [rounds.value, listedAt.value] = [mine, new Date().toISOString()];
    await Promise.all(mine.map(async ({ id }) => {
      const full = await fetchRound(id);
      if (full !== null && (await isHeld(full)) && full.acknowledgedAt === null) await unlessOffline(() => http.post(`/api/estates/${owner.estateId}/rounds/${id}/acknowledge`));
    }));
    await keepList(owner, mine, new Date()).catch(() => undefined);
    await orNothing(dropOtherRounds(owner, mine.map(({ id }) => id)), undefined);
    if ((await orNothing(pruneReceived(new Date()), 0)) > 0) await count();
  }

  /** Opens a round from the phone; from the server only when the phone does not have it. */
  async function openRound(roundId: string): Promise<boolean> {
    const kept = await orNothing(keptRound(owner, roundId), null);
    const found = kept?.round ?? (await fetchRound(roundId));
    if (!found) return false;
    if (!kept) await isHeld(found);
    round.value = found;
    await show(roundId);
    return true;
  }

  /** Fetches the round again for its restrictions. Answers whether the server could be asked. */
  async function refreshRound(roundId: string): Promise<boolean> {
    const fresh = await fetchRound(roundId, unlessRefused);
    if (!fresh) return false;
    if (round.value === null || round.value.id === roundId) round.value = fresh;
    await isHeld(fresh);
    return true;
  }

  /** Tells the office that the walk has begun, if it is in reach: the first reading tells it as well. */
  const tellStart = (roundId: string, startedAt: Date) => unlessRefused(() => http.patch(`/api/estates/${owner.estateId}/rounds/${roundId}`, { state: 'open', startedAt: startedAt.toISOString() }, { withinMs: patienceMs }));

  /** Closes a round on the phone at once; the office is told with the next sending. False where the phone could not note it. */
  async function closeRound(roundId: string): Promise<boolean> {
    const isNoted = (await unlessStoreFails(addClosing({ ...owner, roundId, at: new Date().toISOString() }).then(() => true))) ?? false;
    await count();
    if (isNoted) void send();
    return isNoted;
  }

  /** The walk goes on after all, as far as the office does not know better. */
  async function reopenRound(roundId: string): Promise<void> {
    await unlessStoreFails(dropClosing({ ...owner, roundId }));
    await count();
  }

  /** Shows an entry at once and writes it to the phone; it is safe when this resolves. An entry that cannot be written is shown no longer. */
  async function keep(entry: Entry): Promise<void> {
    writing.set(entry.id, entry);
    entries.value = [...entries.value, entry];
    try {
      await addEntries([entry]);
    } catch (error) {
      // At once and by name: a store that has broken cannot be counted, and the list would stay as it was.
      entries.value = entries.value.filter(({ id }) => id !== entry.id);
      throw error;
    } finally {
      writing.delete(entry.id);
      tellOtherTabs();
      await count();
    }
    if (entry.kind !== 'pick') void send();
  }

  const walk = () => ({ ...owner, round: round.value! });

  /** Keeps a value on the phone. Sending goes on by itself. */
  const record = (stop: WalkStop, vine: StopVine, typed: Typed) => keep(readingEntry(walk(), { stop, vine }, typed));

  /** Notes what stands in the target's place: a proposal for the census, and the reserve takes over. */
  const find = (stop: WalkStop, vine: StopVine, found: Found) => keep(findingEntry(walk(), { stop, vine }, found));

  /** Notes that fruit of the vine went into the open bag. */
  const pick = (stop: WalkStop, vine: StopVine) => keep(pickEntry(walk(), { stop, vine }));

  /** Takes the last entry back if it is only on this phone; a finding that has left it is set aside. */
  async function undo(entry: Entry): Promise<boolean> {
    const isBack = (await takeBack([entry.id])) || entry.kind === 'finding';
    if (entry.kind === 'finding') await setAside(entry.id);
    tellOtherTabs();
    await count();
    return isBack;
  }

  /** Keeps a photo of the vine with a note on the phone. */
  async function photograph(stop: WalkStop, vine: StopVine, taken: { picture: Blob; note: string }): Promise<void> {
    await addPhoto(photoEntry(walk(), { stop, vine }, taken));
    await count();
    void send();
  }

  async function send(): Promise<void> {
    if (owner.personId === '') return;
    isSending.value = true;
    try {
      // A phone without room, or without a store, does not hold up what comes after: each is sent as far as it goes, and again the next time.
      const gone = await unlessStoreFails(sendWaiting(owner.personId, () => new Date()));
      if (gone?.reached) {
        await unlessStoreFails(sendBags(owner.personId, () => new Date()));
        await unlessStoreFails(sendClosings(owner.personId));
        await unlessStoreFails(sendPhotos(owner.personId));
      }
    } finally {
      isSending.value = false;
      tellOtherTabs();
      await count();
    }
    await checkIn();
  }

  /** Sends in their name what others left here. */
  async function sendOthers(): Promise<void> {
    isSending.value = true;
    try {
      await unlessStoreFails(sendForOthers(owner, () => new Date()));
    } finally {
      isSending.value = false;
      await count();
    }
  }

  /** Tells the office how this phone stands, at most once a minute; a phone that was reported lost empties itself once all is received. */
  async function checkIn(): Promise<void> {
    const state = `${waiting.value} ${others.value} ${othersBeside.value} ${isReady.value}`;
    // Nobody is told that nothing waits by a phone that cannot look.
    if (owner.estateId === '' || isUnreadable.value || (state === checkedIn.state && Date.now() - checkedIn.at < 60_000)) return;
    const answer = await tellOffice();
    if (!answer) return;
    checkedIn = { state, at: Date.now() };
    if (!answer.isLost || waiting.value > 0) return;
    if (others.value > 0) {
      await sendOthers();
      await tellOffice();
    }
    emptied.value = await unlessStoreFails(emptyPhone());
  }

  function tellOffice(): Promise<PhoneAnswer | null> {
    const facts = { deviceId: deviceId(), waiting: waiting.value + others.value + othersBeside.value, isReady: isReady.value, deviceTime: new Date().toISOString() };
    return unlessRefused(() => http.post<PhoneAnswer>(`/api/estates/${owner.estateId}/phones/check-in`, facts, { withinMs: patienceMs }));
  }

  function noteReady(ready: boolean): void {
    isReady.value = ready;
    void checkIn();
  }

  return { rounds, listedAt, round, entries, all, waiting, others, othersBeside, isCounted, isUnreadable, isSending, photos, bags, closedHere, emptied, begin, count, recallWork, loadWork, openRound, refreshRound, tellStart, closeRound, reopenRound, record, find, pick, undo, photograph, send, sendOthers, noteReady };
});
