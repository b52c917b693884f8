import type { FitDraft } from "#app/domain/fit-draft.ts";

// Per person and print: a phone that is handed on must not send one's readings as another's.
const prefixOf = (personKey: string) => `spotblue fit ${personKey} `;
const nameOf = (personKey: string, printId: string) => prefixOf(personKey) + printId;

function read(name: string): FitDraft | null {
  const text = localStorage.getItem(name);
  if (text === null) return null;
  try {
    const draft = JSON.parse(text) as FitDraft;
    return draft.version === 1 ? draft : null;
  } catch (fault) {
    if (fault instanceof SyntaxError) return null;
    throw fault;
  }
}

/** The draft kept on this phone; null when there is none, or the browser keeps nothing. */
export function readDraft(personKey: string, printId: string): FitDraft | null {
  return allowed(() => read(nameOf(personKey, printId)), null);
}

/** Keeps the draft; says whether the browser did. */
export function keepDraft(personKey: string, draft: FitDraft): boolean {
  return allowed(() => {
    localStorage.setItem(nameOf(personKey, draft.printId), JSON.stringify(draft));
    return true;
  }, false);
}

export function forgetDraft(personKey: string, printId: string): void {
  allowed(() => localStorage.removeItem(nameOf(personKey, printId)), undefined);
}

/** All drafts of this person that lie on this phone, begun or given out of hand. */
export function listDrafts(personKey: string): FitDraft[] {
  return allowed(() => {
    const names = Array.from({ length: localStorage.length }, (_, index) => localStorage.key(index) ?? "");
    return names.filter((name) => name.startsWith(prefixOf(personKey))).flatMap((name) => read(name) ?? []);
  }, []);
}

/** A browser may refuse storage altogether (private windows, full disk): then nothing is kept, and the page says so. */
function allowed<T>(work: () => T, otherwise: T): T {
  try {
    return work();
  } catch (fault) {
    if (fault instanceof DOMException) return otherwise;
    throw fault;
  }
}

/** A random UUID (version 4). `crypto.randomUUID` exists only over TLS, and a bench phone may come over plain HTTP. */
export function newKey(): string {
  const bytes = crypto.getRandomValues(new Uint8Array(16));
  bytes[6] = (bytes[6]! & 0x0f) | 0x40;
  bytes[8] = (bytes[8]! & 0x3f) | 0x80;
  const hex = Array.from(bytes, (byte) => byte.toString(16).padStart(2, "0")).join("");
  return [hex.slice(0, 8), hex.slice(8, 12), hex.slice(12, 16), hex.slice(16, 20), hex.slice(20)].join("-");
}
