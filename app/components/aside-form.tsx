import { EntryForm, SubmitButton } from "#app/components/form.tsx";

/** Sets a row aside, or takes it up again; nothing is lost either way, so it does not ask twice. */
export function AsideForm({ setAside }: { setAside: boolean }) {
  return (
    <EntryForm intent={setAside ? "take-up" : "set-aside"} className="mt-8">
      <SubmitButton weight="quiet">{setAside ? "Take up again" : "Set aside"}</SubmitButton>
    </EntryForm>
  );
}
