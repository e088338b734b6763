import type { ReactNode } from "react";
import { Camera } from "../ui/drawings";
import { Pin } from "../ui/pin";

/**
 * A place for one photo. Dashed: wanted if it applies. Ink outline and pin 1: asked for now.
 * Solid with a caption: taken. `children` is the control that takes it.
 */
export function PhotoSlot({
  state,
  label,
  detail,
  src,
  alt,
  caption,
  children,
}: {
  state: "wanted" | "asked" | "taken";
  label: ReactNode;
  detail?: ReactNode;
  src?: string;
  alt?: string;
  caption?: ReactNode;
  children?: ReactNode;
}) {
  if (state === "taken") {
    return (
      <figure className="slot full">
        {/* The picture is private and already re-encoded: it is served as it is. */}
        {/* eslint-disable-next-line @next/next/no-img-element */}
        {src ? <img src={src} alt={alt ?? (typeof label === "string" ? label : "Photo")} /> : null}
        <figcaption className="cap">{caption ?? label}</figcaption>
      </figure>
    );
  }
  return (
    <div className={state === "asked" ? "slot on" : "slot"}>
      {state === "asked" ? <Pin /> : null}
      <span>
        <Camera />
        {label}
        {detail ? <small>{detail}</small> : null}
        {children}
      </span>
    </div>
  );
}
