import { useEffect, useState } from "react";

const SLOW = 500; // milliseconds; shorter waits show nothing

/** True once something has been waited for longer than half a second. */
export function useSlow(isWaiting: boolean): boolean {
  const [isSlow, setIsSlow] = useState(false);
  useEffect(() => {
    if (!isWaiting) {
      setIsSlow(false);
      return;
    }
    const timer = setTimeout(() => setIsSlow(true), SLOW);
    return () => clearTimeout(timer);
  }, [isWaiting]);
  return isSlow && isWaiting;
}
