import { createContext, useContext } from "react";

const NonceContext = createContext<string | undefined>(undefined);

export const NonceProvider = NonceContext.Provider;

/** The nonce of this response's content security policy; undefined in the browser. */
export function useNonce(): string | undefined {
  return useContext(NonceContext);
}
