import { useCallback, useEffect, useState } from "react";
import { href, useNavigate } from "react-router";
import { BenchHead } from "#app/components/bench/bench-head.tsx";
import { sayDay, triedOn, withEntry, type BenchProps } from "#app/components/bench/bench-types.ts";
import { CharacteristicStep } from "#app/components/bench/characteristic-step.tsx";
import { forgetDraft, readDraft } from "#app/components/bench/draft-store.ts";
import { FinishStep } from "#app/components/bench/finish-step.tsx";
import { forgetPhoto, listPhotos } from "#app/components/bench/photo-store.ts";
import { PickRows } from "#app/components/bench/pick-rows.tsx";
import { SendingStep } from "#app/components/bench/sending-step.tsx";
import { useBenchPhotos } from "#app/components/bench/use-bench-photos.ts";
import { useDraft } from "#app/components/bench/use-draft.ts";
import { useSending } from "#app/components/bench/use-sending.ts";
import { UnitsProvider, useUnits } from "#app/components/measure.tsx";
import { Notice } from "#app/components/notice.tsx";
import { emptyEntry, foundOf, type FitDraft } from "#app/domain/fit-draft.ts";
import { judgeOnPrint, markOf, trustWords } from "#app/domain/fit.ts";

/** The fit check at the bench, phone first: pick what it is tried on, then one characteristic at a time. */
export function Bench(props: BenchProps) {
  const { personKey, part, print, sealed, characteristics, matingParts, instruments, today } = props;
  const { draft, kept, change, reload } = useDraft(personKey, { id: print.id, label: `${part}, print ${print.name}` }, useUnits());
  const photos = useBenchPhotos(draft?.draftKey ?? null, props.limits);
  const { sending, send, stop } = useSending(personKey, print.id, draft?.finished ?? false);
  const [picking, setPicking] = useState(false);
  const [asked, setAsked] = useState(false);
  const [said, say] = useState("");
  const navigate = useNavigate();

  const stored = sending?.state === "done" ? sending.fitCheckId : null;
  useEffect(() => {
    if (stored) void navigate(href("/fit-checks/:fitCheckId", { fitCheckId: stored }), { replace: true });
  }, [stored, navigate]);

  const throwAway = useCallback(async () => {
    if (!draft) return;
    for (const { id } of await listPhotos(draft.draftKey).catch(() => [])) await forgetPhoto(id);
    forgetDraft(personKey, print.id);
    stop();
    reload();
  }, [draft, personKey, print.id, stop, reload]);

  const list = triedOn(characteristics, draft?.matingPartId ?? null);
  const marks = (draft?.matingPartId ? list : []).map((one) => {
    const judgement = judgeOnPrint(one, foundOf(draft?.entries[one.id]));
    return { name: one.name, state: judgement.places.length === 0 ? ("none" as const) : markOf(judgement.verdict) };
  });
  const head = <BenchHead part={part} print={print} kept={kept} marks={marks} at={draft?.at ?? -1} />;

  const body = () => {
    if (!draft) return <p className="mt-10 text-soft">Looking for what is kept on this phone …</p>;
    const go = (at: number) => change((one) => ({ ...one, at }));
    if (draft.finished) {
      const open = () => {
        // Only a draft that no server can have is opened again.
        change((one) => ({ ...one, finished: false, triedAt: null, attempts: 0 }));
        stop();
      };
      const latest = readDraft(personKey, print.id) ?? draft;
      const mayChange = sending?.state === "refused" && latest.fitCheckId === null;
      return (
        <SendingStep
          sending={sending}
          here={href("/prints/:printId/fit-checks/new", { printId: print.id })}
          onSend={() => void send()}
          onChange={mayChange ? open : null}
          onThrowAway={() => void throwAway()}
          onLeavePhotoOut={(id) => void forgetPhoto(id).then(send)}
        />
      );
    }
    // What was begun is still shown, to be read off; a waiting draft that got through before is still answered.
    if (sealed && draft.matingPartId === null) return null;
    if (draft.at < 0 || draft.matingPartId === null) {
      return <PickMatingPart characteristics={characteristics} matingParts={matingParts} picked={draft.matingPartId} onPick={(matingPartId) => change((one) => ({ ...one, matingPartId, at: 0 }))} />;
    }
    const characteristic = list[draft.at];
    if (!characteristic) {
      const record = () => {
        // What was read for another mating part, picked before, is not part of this fit check.
        const entries = Object.fromEntries(Object.entries(draft.entries).filter(([id]) => list.some((one) => one.id === id)));
        const finished: FitDraft = { ...draft, entries, finished: true, triedAt: new Date().toISOString() };
        change(() => finished);
      };
      return <FinishStep characteristics={list} draft={draft} change={change} photos={photos} onGo={go} onBack={() => go(list.length - 1)} onRecord={record} />;
    }
    const entry = draft.entries[characteristic.id];
    const instrument = instruments.find(({ id }) => id === ((entry?.readings.length ? entry.instrumentId : null) ?? draft.instrumentId)) ?? null;
    const read = characteristic.kind !== "yes-no";
    if (picking || (read && !instrument && !asked && instruments.length > 0)) {
      return (
        <div className="mt-4 flex-1">
          <h1 className="text-sentence">With which instrument?</h1>
          <p className="mb-3 text-soft">It stays picked until you change it.</p>
          <PickRows
            label="Instruments"
            picked={picking ? (instrument?.id ?? null) : undefined}
            onPick={(id) => {
              setPicking(false);
              setAsked(true);
              change((one) => withEntry({ ...one, instrumentId: id }, characteristic.id, (was) => ({ ...was, instrumentId: id }), emptyEntry));
            }}
            rows={[...instruments.map((one) => ({ id: one.id, label: one.name, detail: trustWords(one, draft.unit, today, sayDay) })), { id: null, label: "None is named", detail: "The readings count, their uncertainty is not known" }]}
          />
        </div>
      );
    }
    return (
      <CharacteristicStep
        key={characteristic.id}
        characteristic={characteristic}
        draft={draft}
        change={change}
        instrument={instrument}
        hasInstruments={instruments.length > 0}
        today={today}
        photos={photos}
        onPickInstrument={() => setPicking(true)}
        onNext={() => go(draft.at + 1)}
        onBack={() => go(draft.at - 1)}
        last={draft.at === list.length - 1}
        say={say}
      />
    );
  };

  return (
    <UnitsProvider units={draft?.unit ?? "mm"}>
      <main id="sheet" className="mx-auto flex min-h-dvh w-full max-w-[30rem] flex-col bg-sheet px-3.5 sm:border-x sm:border-rule">
        {head}
        {sealed && <Notice kind="error">Revision {sealed} was released and is sealed: no fit check can be added to it. Record a print of the next revision, and try that one on.</Notice>}
        {print.spoiled && <Notice kind="error">Print {print.name} does not count: {print.spoiled}. What is tried on it is kept, and proves nothing.</Notice>}
        <noscript>
          <p className="mt-6">This page keeps your readings on the phone, and needs scripts for it.</p>
        </noscript>
        {body()}
        <p aria-live="polite" className="sr-only">
          {said}
        </p>
      </main>
    </UnitsProvider>
  );
}

/** What it is tried on decides which characteristics come. */
function PickMatingPart({ characteristics, matingParts, picked, onPick }: Pick<BenchProps, "characteristics" | "matingParts"> & { picked: string | null; onPick: (id: string) => void }) {
  const count = (id: string) => triedOn(characteristics, id).length;
  const usable = matingParts.filter(({ id }) => count(id) > 0);
  return (
    <div className="mt-4 flex-1 pb-4">
      <h1 className="text-sentence">What is it tried on?</h1>
      {usable.length > 0 ? (
        <>
          <p className="mb-3 text-soft">Then comes one characteristic after the other.</p>
          <PickRows
            label="Mating parts"
            picked={picked ?? undefined}
            onPick={(id) => id && onPick(id)}
            rows={usable.map(({ id, name, description }) => ({ id, label: name, detail: `${count(id) === 1 ? "one characteristic" : `${count(id)} characteristics`}${description ? `, ${description}` : ""}` }))}
          />
        </>
      ) : (
        <p className="mt-4 text-soft">{characteristics.length === 0 ? "This print can prove no characteristic. Add one to the part first." : "No mating part of this job is named by what this print can prove. Take in the customer's hardware first."}</p>
      )}
    </div>
  );
}
