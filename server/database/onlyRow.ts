/** The row that a statement which always gives one has given. */
export function onlyRow<Row>(rows: readonly Row[]): Row {
  const [row] = rows
  if (row === undefined) throw new Error('statement gave no row')
  return row
}
