/** A coordinate file as a text, taken into the bundle. */
declare module '*.xyz' {
  const text: string;
  export default text;
}
