/** A lock file that a killed holder does not leave closed: it names a process and when that process began. */
import { readFileSync, renameSync, rmSync, writeFileSync } from 'node:fs';

/** When a process began, in clock ticks since boot; undefined when it is gone. Tells a reused process number apart. */
function beganAt(pid) {
  try {
    // The second field, the program's name, may hold spaces and brackets: count from its last bracket.
    const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
    return stat.slice(stat.lastIndexOf(')') + 2).split(' ')[19];
  } catch {
    return undefined;
  }
}

/** What the holder of a lock wrote, if that holder still runs. */
export function holderOf(file) {
  let text;
  try {
    text = readFileSync(file, 'utf8');
  } catch {
    return undefined;
  }
  try {
    const holder = JSON.parse(text);
    return beganAt(holder.pid) === holder.began ? holder : undefined;
  } catch {
    return undefined;
  }
}

/**
 * Takes the lock for this process, or returns `{ holder }` when another running process has it.
 * `note(more)` adds to what others can read; `release()` gives the lock back.
 */
export function takeLock(file) {
  const own = { pid: process.pid, began: beganAt(process.pid) };
  const write = (more, options) => writeFileSync(file, JSON.stringify({ ...own, ...more }), options);
  for (;;) {
    try {
      write({}, { flag: 'wx', mode: 0o644 });
      return { note: (more) => write(more), release: () => rmSync(file, { force: true }) };
    } catch (error) {
      if (error.code !== 'EEXIST') throw error;
    }
    const holder = holderOf(file);
    if (holder) return { holder };
    // A dead holder's file: moved away, not deleted, so that of two starts that both saw it only one moves it.
    const aside = `${file}.${process.pid}`;
    try {
      renameSync(file, aside);
    } catch (error) {
      if (error.code !== 'ENOENT') throw error;
      continue;
    }
    const taken = holderOf(aside);
    if (taken) renameSync(aside, file);
    else rmSync(aside, { force: true });
    if (taken) return { holder: taken };
  }
}
