/** Of a list that is shown in pages; 0 for an empty one, or before it is known. */
export function countPages(list: { total: number; pageSize: number } | undefined): number {
  return list === undefined ? 0 : Math.ceil(list.total / list.pageSize);
}
