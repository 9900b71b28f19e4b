// As entry.mjs: outside the bundle this registers tsx first. The bundle starts helper-entry.js instead.
import { register } from 'tsx/esm/api';

register();
await import('./helper-entry.ts');
