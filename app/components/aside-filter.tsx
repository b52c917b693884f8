import { useSearchParams } from "react-router";

/** In a table's tools: rows that were set aside are listed too. */
export function AsideFilter() {
  const [params] = useSearchParams();
  const shown = params.get("aside") === "1";
  return (
    <label key={String(shown)} className="flex min-h-11 items-center gap-2.5">
      <input type="checkbox" name="aside" value="1" defaultChecked={shown} className="tick" />
      with those set aside
    </label>
  );
}
