/** What the runs of a sample do, for people. */
export const runTitles: Readonly<Record<string, string>> = {
  'sample.read': 'Reading the file',
  'sample.compare': 'Comparing the partitions',
  'sample.confirm': 'Confirming the definition',
  'sample.quality': 'Making the quality report',
};
