import { useState } from 'react';

/** What a mail's link carries behind the # of its address; empty if nothing. Read once: the page keeps it while it is open. */
export function useCarried(): string {
  const [carried] = useState(() => decodeURIComponent(location.hash.slice(1)));
  return carried;
}
