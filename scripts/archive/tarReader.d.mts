export function readTar(file: string): AsyncGenerator<{ name: string; size: number; content: () => AsyncGenerator<Uint8Array> }>;
