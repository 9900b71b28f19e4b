/** Header of a PATCH that sends the last bytes: SHA-256 of the whole file as its sender has it, in hex. Where it differs there is no sample. */
export const wholeFileHeader = 'Upload-Sha256';
