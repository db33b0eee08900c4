/** Places in one growing wasm memory: first fit, neighbours joined when given back. Addresses in bytes, 64-byte aligned. */
export interface Arena {
  /** Address of `bytes` bytes, not cleared. Throws RangeError when the memory cannot grow so far. */
  take(bytes: number): number;
  give(address: number): void;
  floats(address: number, length: number): Float64Array;
  bytes(address: number, length: number): Uint8Array;
}

const page = 65536;
const align = 64;

export function newArena(memory: WebAssembly.Memory): Arena {
  let end = 4096;
  let free: { at: number; size: number }[] = [];
  const taken = new Map<number, number>();
  const grow = (to: number) => {
    const missing = Math.ceil((to - memory.buffer.byteLength) / page);
    if (missing <= 0) return;
    try {
      memory.grow(missing);
    } catch {
      throw new RangeError(`no memory for vectors: ${String(Math.ceil(to / 2 ** 20))} MiB needed`);
    }
  };
  return {
    take(bytes) {
      const size = Math.max(align, Math.ceil(bytes / align) * align);
      const hole = free.find((f) => f.size >= size);
      let at = end;
      if (hole) {
        at = hole.at;
        hole.at += size;
        hole.size -= size;
        free = free.filter((f) => f.size > 0);
      } else {
        grow(end + size);
        end += size;
      }
      taken.set(at, size);
      return at;
    },
    give(address) {
      const size = taken.get(address);
      if (size === undefined) throw new RangeError('memory given back twice');
      taken.delete(address);
      free.push({ at: address, size });
      free.sort((a, b) => a.at - b.at);
      const joined: { at: number; size: number }[] = [];
      for (const f of free) {
        const last = joined.at(-1);
        if (last && last.at + last.size === f.at) last.size += f.size;
        else joined.push({ ...f });
      }
      const top = joined.at(-1);
      if (top && top.at + top.size === end) {
        end = top.at;
        joined.pop();
      }
      free = joined;
    },
    floats: (address, length) => new Float64Array(memory.buffer, address, length),
    bytes: (address, length) => new Uint8Array(memory.buffer, address, length),
  };
}
