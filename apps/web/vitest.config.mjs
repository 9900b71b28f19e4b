import { defineConfig } from 'vitest/config';

/** For `ng test`. A page with Material pieces takes a second to set up; on a busy machine, several. */
export default defineConfig({ test: { testTimeout: 30_000, hookTimeout: 30_000 } });
