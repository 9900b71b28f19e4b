/** What the chain finds wrong with the data it was given. Every problem of a step is collected before anything is thrown. */

export interface ReplayProblem {
  code: string;
  message: string;
  where: {
    column?: string;
    /** Distinct values concerned, with the number of rows of each, most frequent first, at most 20. */
    values?: { value: string; rows: number }[];
    /** Rows concerned in all. */
    count?: number;
    bin?: string;
    fold?: number;
    path?: string;
  };
}

export class ReplayError extends Error {
  constructor(readonly problems: readonly ReplayProblem[]) {
    super(problems.map((problem) => problem.message).join(' '));
    this.name = 'ReplayError';
  }
}

export function refuse(problems: readonly ReplayProblem[]): void {
  if (problems.length > 0) throw new ReplayError(problems);
}

/** Counts rows by the text that is at fault. */
export class ValueCounts {
  private readonly counts = new Map<string, number>();

  add(value: string, rows = 1): void {
    this.counts.set(value, (this.counts.get(value) ?? 0) + rows);
  }

  get total(): number {
    let total = 0;
    for (const rows of this.counts.values()) total += rows;
    return total;
  }

  /** Null if nothing was added. */
  problem(code: string, column: string, say: (listed: string, total: number) => string): ReplayProblem | null {
    if (this.counts.size === 0) return null;
    const values = [...this.counts].map(([value, rows]) => ({ value, rows })).sort((a, b) => b.rows - a.rows);
    const listed = values
      .slice(0, 5)
      .map(({ value, rows }) => `${value === '' ? 'empty' : JSON.stringify(value)} (${rows})`)
      .join(', ');
    const more = values.length > 5 ? ` and ${values.length - 5} more` : '';
    return { code, message: say(listed + more, this.total), where: { column, values: values.slice(0, 20), count: this.total } };
  }
}
