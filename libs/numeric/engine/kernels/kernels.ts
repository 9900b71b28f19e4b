import { KERNELS, SHARED_KERNELS } from './bytes';
import { plainKernels } from './plain';

/** What a kernel does with the description at `description` (see `descriptor.ts`); `scratch` is a place of `scratchBytes` of its own. */
export interface Kernels {
  readonly pass32: (description: number, chunk: number, scratch: number) => void;
  readonly pass64: (description: number, chunk: number, scratch: number) => void;
  readonly spread32: (description: number) => void;
  readonly spread64: (description: number) => void;
  readonly gram: (description: number, unit: number, scratch: number) => void;
}

/** Memory with the kernels over it. */
export interface Machine {
  readonly buffer: ArrayBufferLike;
  readonly kernels: Kernels;
  /** For another thread, which makes its own machine of it; null where memory is not shared. */
  readonly shared: unknown;
}

/** As much of the host's WebAssembly as is used here: the library knows neither a browser's types nor Node's. */
interface WebAssemblyHost {
  readonly Module: new (bytes: Uint8Array) => object;
  readonly Instance: new (module: object, imports: object) => { readonly exports: Record<string, unknown> };
  readonly Memory: new (limits: { initial: number; maximum: number; shared: boolean }) => { readonly buffer: ArrayBufferLike };
}

const PAGE = 65536;
const MOST_PAGES = 65536;

const host = (): WebAssemblyHost | undefined => (globalThis as { WebAssembly?: WebAssemblyHost }).WebAssembly;
const modules = new Map<string, object | null>();

/** The compiled kernels, once per thread; null where WebAssembly or its 128-bit vectors are missing or forbidden. */
function compiled(text: string): object | null {
  const known = modules.get(text);
  if (known !== undefined) return known;
  let module: object | null = null;
  try {
    const found = host();
    if (found) module = new found.Module(fromBase64(text));
  } catch {
    // A content security policy, or an engine without vectors: the plain kernels give the same numbers.
  }
  modules.set(text, module);
  return module;
}

export type KernelKind = 'fastest' | 'plain';

/**
 * Memory of at least `bytes` and kernels over it: WebAssembly's, or the plain ones where it may not run (or when asked for).
 * @param shared other threads are to work on it too
 */
export function makeMachine(bytes: number, kind: KernelKind = 'fastest', shared = false): Machine {
  const pages = Math.ceil(bytes / PAGE);
  const found = host();
  const module = kind === 'plain' ? null : compiled(shared ? SHARED_KERNELS : KERNELS);
  if (found && module) {
    const memory = new found.Memory({ initial: pages, maximum: MOST_PAGES, shared });
    return { buffer: memory.buffer, kernels: instantiate(found, module, memory), shared: shared ? memory : null };
  }
  const buffer = new ArrayBuffer(pages * PAGE);
  return { buffer, kernels: plainKernels(buffer), shared: null };
}

/** The machine of another thread over `shared` of its owner's. @throws where WebAssembly may not run: its owner could not have made it */
export function joinMachine(shared: unknown): Machine {
  const found = host();
  const module = compiled(SHARED_KERNELS);
  if (!found || !module) throw new Error('Shared kernels need WebAssembly.');
  const memory = shared as { readonly buffer: ArrayBufferLike };
  return { buffer: memory.buffer, kernels: instantiate(found, module, memory), shared };
}

function instantiate(found: WebAssemblyHost, module: object, memory: object): Kernels {
  return new found.Instance(module, { env: { memory } }).exports as unknown as Kernels;
}

const ALPHABET = 'ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/';

function fromBase64(text: string): Uint8Array {
  const clean = text.replace(/=+$/, '');
  const bytes = new Uint8Array((clean.length * 3) >> 2);
  let bits = 0;
  let held = 0;
  let to = 0;
  for (const letter of clean) {
    held = ((held << 6) | ALPHABET.indexOf(letter)) & 0xffffff;
    bits += 6;
    if (bits >= 8) bytes[to++] = (held >> (bits -= 8)) & 255;
  }
  return bytes;
}
