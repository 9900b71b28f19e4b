/**
 * Makes the demo that the browser tests start on, while others still compute, and writes where it lies.
 *
 *   tsx tests/support/lay-ground.ts FILE
 */
import { writeFileSync } from 'node:fs';
import { layGround } from './installation';

const file = process.argv[2];
if (!file) throw new Error('Usage: tsx tests/support/lay-ground.ts FILE');
writeFileSync(file, JSON.stringify(await layGround({ demo: true })));
