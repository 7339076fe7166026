/**
 * A scratch array that is kept between calls and grows when needed, so that the kernels allocate nothing in
 * their loops. One owner per array; what it held is overwritten. Safe because the kernels neither await nor call
 * one another's owner, and a JavaScript realm runs one of them at a time.
 * @returns a function that gives the array, at least `length` long, contents undefined
 */
export function workArray(): (length: number) => Float64Array {
  let kept = new Float64Array(0);
  return (length) => {
    if (kept.length < length) kept = new Float64Array(Math.max(length, 2 * kept.length));
    return kept;
  };
}
