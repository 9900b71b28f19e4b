// Worker threads do not load TypeScript by themselves: outside the bundle this registers tsx first. The bundle starts entry.js instead.
import { register } from 'tsx/esm/api';

register();
await import('./entry.ts');
