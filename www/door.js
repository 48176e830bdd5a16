/**
 * What crosses the door, in types. There is no code here: the core computes, the page shows.
 *
 * @typedef {{ pointer: string, code: string, given?: unknown, allowed?: unknown, sentence: string }} Fault
 * @typedef {{ name: string, asks: string, fields: string[] }} Question
 * @typedef {{ pointer: string, name: string, unit: string, allowed?: unknown, usual: string }} Field
 * @typedef {"auto" | "point" | "comma"} Mark
 *
 * @typedef {{ label: string, unit: string, scale: "linear" | "log", min?: number | null, max?: number | null }} Axis
 * @typedef {{ name: string, x: number[], y: number[] }} Line
 * @typedef {{ name: string, axis?: "x" | "y", at?: number, x?: number | number[], y?: number | number[] }} CurveMark
 * @typedef {{ name: string, title: string, x: Axis, y: Axis, lines: Line[], marks: CurveMark[] }} Curve
 *
 * @typedef {{ name: string, figure: string, note?: string, copy?: string }} Fact
 * @typedef {{ title: string, total: string, rows: { cause: string, figure: string, share: number }[] }} Budget
 * @typedef {{ title: string, columns: string[], rows: string[][] }} Table
 * @typedef {{
 *   headline: { figure: string, sentence: string }, facts: Fact[], budgets: Budget[], tables: Table[],
 *   cautions: { about: string, sentence: string }[], doubts: string[], notes: string[]
 * }} Shown
 * @typedef {{ name: string, values: { pointer: string, value: number | string }[], uncertainty: { inputs: unknown[], correlations: unknown[] } }} OntoBench
 * @typedef {{ shown: Shown, curves: Curve[], onto_bench?: OntoBench | null } & Record<string, unknown>} Answer
 * @typedef {{ answer?: Answer, faults?: Fault[] }} Asked
 *
 * @typedef {{ index: number, header: string | null, role: string, unit: string | null }} Column
 * @typedef {{
 *   delimiter: string, decimal_mark: string, skipped_lines: number, header_line: number | null, columns: Column[],
 *   rows_read: number, bad_rows: { line: number, text: string, sentence: string }[], cleaned: string[]
 * }} Reading
 * @typedef {{ form?: string, coverage_factor?: number | null, points: Record<string, number | null>[], reading: Reading }} ReadTable
 * @typedef {{ bench: Bench, understood: Record<string, string>, tables: Record<string, Reading>, faults: Fault[] }} Understood
 *
 * @typedef {{ understood: Record<string, string>, tables: Record<string, Reading>, faults: Fault[], blocking: Fault[], answer: Answer | null }} Followed
 *
 * @typedef {Record<string, any>} Bench
 *
 * @typedef {{
 *   questions(): Question[], fields(): Field[], version(): string, demo(): Bench,
 *   ask(question: string, bench: Bench, options?: unknown): Asked,
 *   understand(typed: Bench, mark: Mark): Understood,
 *   follow(question: string, typed: Bench, mark: Mark): Followed,
 *   read_certificate(text: string, choices?: unknown): { value?: ReadTable, faults?: Fault[] },
 *   read_responsivity(text: string, choices?: unknown): { value?: ReadTable, faults?: Fault[] },
 *   read_bench(text: string): { value?: Bench, faults?: Fault[] },
 *   write_number(pointer: string, value: number, mark: Mark): string,
 *   write_table(pointer: string, bench: Bench, mark: Mark): { value?: string, faults?: Fault[] },
 * }} Door
 */
export {};
