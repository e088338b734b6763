import type { PackStep } from "@/lib/rma/rules";

/** Silkscreen drawings of the packing steps, for the page and, as paths, for the sheet. */
export const PACK_PATHS: Record<PackStep["drawing"], string> = {
  cap: "M20 10h44v7H20z M42 17v6 M16 23h52v36H16z M22 29h40v24H22z M16 23h9l-9 9z",
  clamshell: "M14 34h56v24H14z M14 34l8-20h40l8 20 M28 40h28v12H28z",
  bag: "M20 8h44v50H20z M20 14h44 M30 24h24v24H30z",
  foam: "M8 6h68v56H8z M24 18h36v32H24z M42 6v12 M42 50v12 M8 34h16 M60 34h16",
  data: "M20 14h44v44H20z M42 22a14 14 0 1 0 .1 0z M42 33a3 3 0 1 0 .1 0z M26 60 58 8",
  paper: "M10 14h64v46H10z M30 24h30v20H30z M34 29h20 M34 34h14 M34 39h18",
  truck:
    "M8 16h34v30H8z M42 26h14l12 12v8H42z M20 46a5 5 0 1 0 .1 0z M56 46a5 5 0 1 0 .1 0z M4 46h8 M26 46h24 M62 46h10",
  lift: "M30 30h24v10H30z M20 20a4 4 0 1 0 .1 0z M64 20a4 4 0 1 0 .1 0z M20 28v18 M64 28v18 M20 32l10 4 M64 32l-10 4",
};

export function PackDrawing({ drawing }: { drawing: PackStep["drawing"] }) {
  return (
    <svg className="pack-drawing" viewBox="0 0 84 70" aria-hidden="true">
      <path d={PACK_PATHS[drawing]} />
    </svg>
  );
}
