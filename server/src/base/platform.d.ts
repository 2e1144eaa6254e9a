/**
 * The only things the layers below the protocol take from their surroundings; both exist in Node and in a web worker.
 * Declared here so that those layers compile with neither the Node nor the DOM types.
 */
declare class TextDecoder {
  constructor(label?: string, options?: { fatal?: boolean; ignoreBOM?: boolean });
  decode(input?: Uint8Array): string;
}

declare class TextEncoder {
  encodeInto(source: string, destination: Uint8Array): { read: number; written: number };
}
