/** Right, warn and stop differ for the ear too: one high note, two middle ones, a long low one. */
const NOTES: Record<"right" | "warn" | "stop", [hertz: number, from: number, seconds: number][]> = {
  right: [[880, 0, 0.09]],
  warn: [
    [520, 0, 0.1],
    [520, 0.16, 0.1],
  ],
  stop: [[170, 0, 0.55]],
};

let device: AudioContext | null = null;

export function sound(kind: keyof typeof NOTES): void {
  try {
    device ??= new AudioContext();
    for (const [hertz, from, seconds] of NOTES[kind]) {
      const note = device.createOscillator();
      const level = device.createGain();
      note.type = kind === "stop" ? "square" : "sine";
      note.frequency.value = hertz;
      level.gain.value = 0.08;
      note.connect(level).connect(device.destination);
      note.start(device.currentTime + from);
      note.stop(device.currentTime + from + seconds);
    }
  } catch {
    // No sound device: color, shape and words say it too.
  }
}
