/** A photo taken at the bench, kept with its draft until it is sent. */
export interface KeptPhoto {
  id: string;
  draftKey: string;
  /** null: the fit check as a whole. */
  characteristicId: string | null;
  name: string;
  mediaType: string;
  sha256: string;
  blob: Blob;
}

const storeName = "photos";

function open(): Promise<IDBDatabase> {
  return new Promise((resolve, reject) => {
    const request = indexedDB.open("spotblue bench", 1);
    request.onupgradeneeded = () => request.result.createObjectStore(storeName, { keyPath: "id" }).createIndex("draft", "draftKey");
    request.onsuccess = () => resolve(request.result);
    request.onerror = () => reject(request.error ?? new Error("the browser keeps no photos"));
  });
}

async function inStore<T>(mode: IDBTransactionMode, work: (store: IDBObjectStore) => IDBRequest<T>): Promise<T> {
  const database = await open();
  try {
    return await new Promise<T>((resolve, reject) => {
      const transaction = database.transaction(storeName, mode);
      const request = work(transaction.objectStore(storeName));
      transaction.oncomplete = () => resolve(request.result);
      transaction.onerror = transaction.onabort = () => reject(transaction.error ?? new Error("the browser did not keep it"));
    });
  } finally {
    database.close();
  }
}

/** Resolves when the photo is on the phone's disk. */
export const keepPhoto = (photo: KeptPhoto) => inStore("readwrite", (store) => store.put(photo));

export const forgetPhoto = (id: string) => inStore("readwrite", (store) => store.delete(id));

export const listPhotos = (draftKey: string): Promise<KeptPhoto[]> => inStore("readonly", (store) => store.index("draft").getAll(draftKey) as IDBRequest<KeptPhoto[]>);
