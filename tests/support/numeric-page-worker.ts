import { fitInvented, type InventedOrder } from './invented-fit';

/** The web worker of numeric-page.ts: the same order gives the same fit here as in Node.js. */
interface WorkerScope {
  onmessage: ((event: { readonly data: InventedOrder }) => void) | null;
  postMessage(message: unknown): void;
}
const scope = globalThis as unknown as WorkerScope;
scope.onmessage = ({ data }) => scope.postMessage(fitInvented(data));
