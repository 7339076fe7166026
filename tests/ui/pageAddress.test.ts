import { describe, expect, it } from 'vitest';
import { pageAddress } from '$lib/ui/kit/pageAddress';

describe('the address of a page of a list', () => {
  it('keeps the filter and changes only the page', () => {
    expect(pageAddress('/trail', '?who=ann+o&page=2', 3)).toBe('/trail?who=ann+o&page=3');
    expect(pageAddress('/trail', '?page=2&who=b', 1)).toBe('/trail?who=b');
  });

  it('is the bare path for the first page of an unfiltered list', () => {
    expect(pageAddress('/lots', '?page=2', 1)).toBe('/lots');
  });

  it('leaves a value that holds the signs of an address one value', () => {
    const address = pageAddress('/trail', '?record=A%26page%3D9', 2);
    expect(new URLSearchParams(address.split('?')[1]).get('record')).toBe('A&page=9');
    expect(new URLSearchParams(address.split('?')[1]).getAll('page')).toEqual(['2']);
  });
});
