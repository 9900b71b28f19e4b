/** `work`: a worker and nothing else, for a machine that only computes. The same as `main --services=worker`. */
process.argv.push('--services=worker');
await import('../main');

export {};
