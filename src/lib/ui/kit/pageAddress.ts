/** The address of a page of a list, with the rest of the query as it stands. Page 1 needs no parameter. */
export function pageAddress(path: string, search: string, page: number, parameter = 'page'): string {
  const query = new URLSearchParams(search);
  if (page === 1) query.delete(parameter);
  else query.set(parameter, String(page));
  const text = query.toString();
  return text === '' ? path : `${path}?${text}`;
}
