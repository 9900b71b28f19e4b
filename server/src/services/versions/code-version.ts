import { name, version } from '../../../../package.json';

/** Which code made the numbers. */
export const codeVersionFacts = (): { product: string; codeVersion: string; node: string } => ({ product: name, codeVersion: version, node: process.versions.node });
