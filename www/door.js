/**
 * What crosses the door, in types. There is no code here: the core computes, the page shows.
 *
 * @typedef {{ pointer: string, code: string, given?: unknown, allowed?: any, sentence: string }} Fault
 * @typedef {{ name: string, asks: string, fields: string[], uncertain: [name: string, says: string][] }} Question
 * @typedef {{ question: string, name: string, pointer: string, stated: string, amount: string, distribution: string, times: string, note: string }} UsualDoubt
 * @typedef {{ pointer: string, name: string, unit: string, allowed?: unknown, usual: string }} Field
 * @typedef {"auto" | "point" | "comma"} Mark
 *
 * @typedef {{ label: string, unit: string, scale: "linear" | "log", min?: number | null, max?: number | null }} Axis
 * @typedef {{ name: string, x: number[], y: number[] }} Line
 * @typedef {{ name: string, axis?: "x" | "y", at?: number, x?: number | number[], y?: number | number[] }} CurveMark
 * @typedef {{ name: string, title: string, x: Axis, y: Axis, lines: Line[], marks: CurveMark[], band?: Band }} Curve
 *
 * @typedef {{ name: string, figure: string, note?: string, copy?: string }} Fact
 * @typedef {{ title: string, total: string, rows: { cause: string, figure: string, share: number }[] }} Budget
 * @typedef {{ title: string, columns: string[], rows: string[][] }} Table
 * @typedef {{
 *   headline: { figure: string, sentence: string, uncertainty: string }, facts: Fact[], budgets: Budget[], tables: Table[],
 *   cautions: { about: string, sentence: string }[], doubts: string[], notes: string[]
 * }} Shown
 * @typedef {{ name: string, values: { pointer: string, value: number | string }[], uncertainty: { inputs: { pointer: string, standard: number, degrees_of_freedom?: number }[], correlations: [number, number, number][] } }} OntoBench
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
 * @typedef {{ understood: Record<string, string>, tables: Record<string, Reading>, faults: Fault[], blocking: Fault[], answer: Answer | null, uncertainty: object | null }} Followed
 *
 * @typedef {{ low: number, high: number, breaks: number[] }} Band
 * @typedef {Reading & { times: string, stated_setting_nm: number | null, status: { word: string, rows: number, good: boolean }[] }} LogReading
 * @typedef {{ reading: LogReading, counts: Record<string, number>, curves: Curve[], shown: Shown } & Record<string, unknown>} Log
 * @typedef {{ value?: Log, faults?: Fault[], reading?: LogReading | null }} LogOutcome what the worker makes of a log
 *
 * @typedef {{ understood: Record<string, string>, tables: Record<string, Reading>, faults: Fault[], transfer: Transfer | null }} FollowedTransfer
 * @typedef {{
 *   reference: string, test: string, certificate: Certificate, coverage_probability: number,
 *   history: { reference_device: string, reference_certificate: string, lines: string[] }, csv: string, shown: Shown
 * }} Transfer
 * @typedef {{ form: string, coverage_factor: number | null, points: { wavelength_nm: number, value: number, expanded_percent: number | null }[] }} Certificate
 * @typedef {{ index: number, name: string, place: string, ref_type: string, unit: string, kind: string, count: number, first: number | null, last: number | null, has_uncertainty: boolean, coverage_factor: number | null }} DccQuantity
 * @typedef {{
 *   schema_version: string, identifier: string, laboratory: string, item: string, end_date: string, signed: boolean,
 *   quantities: DccQuantity[], taken: { wavelength: number | null, value: number | null, expanded: number | null, form: string | null },
 *   guessed: boolean, certificate: (Certificate & { bad_points: { number: number, sentence: string }[] }) | null, notes: string[]
 * }} DccReading
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
 *   follow_transfer(text: string, typed: Bench, choices: unknown, mark: Mark): FollowedTransfer,
 *   read_dcc(text: string, choices?: unknown): { value?: DccReading, faults?: Fault[] },
 *   write_dcc(bench: Bench, administration: unknown, mark?: Mark): { value?: string, faults?: Fault[] },
 *   read_bench(text: string): { value?: Bench, faults?: Fault[] },
 *   write_number(pointer: string, value: number, mark: Mark): string,
 *   write_doubts(bench: Bench, mark: Mark): { value?: object | null, faults?: Fault[] },
 *   usual_doubts(): UsualDoubt[],
 *   write_table(pointer: string, bench: Bench, mark: Mark): { value?: string, faults?: Fault[] },
 * }} Door
 */
export {};
