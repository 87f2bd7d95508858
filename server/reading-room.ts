/**
 * How many bytes of bodies may be on their way in. A sender that is slow holds its share for minutes, so one rig can
 * fill no more than its own, and recordings never the room of the small messages that boards live on.
 */
const smallBytes = 1024 * 1024;

export type ReadingLimits = {
  /** All bodies above 1 MiB together, and those of one rig. */
  large: number;
  largeOfRig: number;
  /** The same of smaller bodies. */
  small: number;
  smallOfRig: number;
};

const mib = 1024 * 1024;
export const defaultReadingLimits: ReadingLimits = {
  large: 192 * mib,
  largeOfRig: 64 * mib,
  small: 64 * mib,
  smallOfRig: 8 * mib,
};

export type ReadingRoom = {
  /** Takes room for a body; gives what gives it back, or undefined where there is none. */
  enter(rigId: string, bytes: number): (() => void) | undefined;
};

export function createReadingRoom(limits: ReadingLimits = defaultReadingLimits): ReadingRoom {
  const lanes = {
    small: createLane(limits.small, limits.smallOfRig),
    large: createLane(limits.large, limits.largeOfRig),
  };
  return {
    enter: (rigId, bytes) => (bytes <= smallBytes ? lanes.small : lanes.large)(rigId, bytes),
  };
}

function createLane(maxBytes: number, maxRigBytes: number): ReadingRoom['enter'] {
  const byRig = new Map<string, number>();
  let all = 0;
  return (rigId, bytes) => {
    const mine = byRig.get(rigId) ?? 0;
    if (all + bytes > maxBytes || mine + bytes > maxRigBytes) return undefined;
    all += bytes;
    byRig.set(rigId, mine + bytes);
    return () => {
      all -= bytes;
      const left = (byRig.get(rigId) ?? 0) - bytes;
      if (left > 0) byRig.set(rigId, left);
      else byRig.delete(rigId);
    };
  };
}
