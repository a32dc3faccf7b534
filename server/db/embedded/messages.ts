/** What the server and the thread of its embedded database say to each other. Questions are answered in order. */
export type Question =
  | { readonly ask: 'query'; readonly sql: string; readonly params: readonly unknown[]; readonly rowMode: 'object' | 'array' }
  | { readonly ask: 'close' };

export interface Asked {
  readonly id: number;
  readonly question: Question;
}

/** A row's values by column name, or in order. */
export interface QueryResult {
  readonly rows: unknown[];
  readonly fields: readonly { readonly name: string; readonly dataTypeID: number }[];
  readonly affectedRows?: number;
}

export type Answer =
  | { readonly id: number; readonly result: QueryResult | null }
  /** `about` are PostgreSQL's own fields: code, constraint, detail and so on. */
  | { readonly id: number; readonly fault: string; readonly about: Readonly<Record<string, string | number>> };

/** The first word of the thread: the database is open, or cannot be opened; `about` is what the file system said. */
export type FirstWord = { readonly open: true } | { readonly open: false; readonly fault: string; readonly about: Readonly<Record<string, string | number>> };
