const days = new Intl.DateTimeFormat('en-GB', { day: 'numeric', month: 'long', year: 'numeric' });
const moments = new Intl.DateTimeFormat('en-GB', { dateStyle: 'long', timeStyle: 'short' });

/** A day as it is printed: 3 May 2026; with its time where the hour matters. */
export function Day({ at, time = false }: { at: string; time?: boolean }) {
  return <time dateTime={at}>{(time ? moments : days).format(new Date(at))}</time>;
}
