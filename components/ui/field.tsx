import type { ComponentProps, ReactNode } from "react";

type Around = {
  label: ReactNode;
  name: string;
  hint?: ReactNode;
  /** Stands above the field and makes its edge oxide. Null and empty mean none. */
  error?: string | null;
  mono?: boolean;
};

/** Element ids of a field: an error summary links to `id`. */
export function fieldIds(name: string, id?: string) {
  const base = id ?? `f-${name.replace(/[^A-Za-z0-9_-]/g, "-")}`;
  return { id: base, hint: `${base}-hint`, error: `${base}-error` };
}

const described = (ids: ReturnType<typeof fieldIds>, hint: unknown, error: unknown) =>
  [hint ? ids.hint : "", error ? ids.error : ""].filter(Boolean).join(" ") || undefined;

function Frame({
  ids,
  label,
  hint,
  error,
  children,
}: Pick<Around, "label" | "hint" | "error"> & { ids: ReturnType<typeof fieldIds>; children: ReactNode }) {
  return (
    <div className="field">
      <label htmlFor={ids.id}>{label}</label>
      {hint ? (
        <p className="hint" id={ids.hint}>
          {hint}
        </p>
      ) : null}
      {error ? (
        <p className="err" id={ids.error}>
          {error}
        </p>
      ) : null}
      {children}
    </div>
  );
}

const wiring = (ids: ReturnType<typeof fieldIds>, hint: unknown, error: unknown) => ({
  id: ids.id,
  "aria-describedby": described(ids, hint, error),
  "aria-invalid": error ? (true as const) : undefined,
});

const face = (mono?: boolean, error?: string | null, more?: string) =>
  ["in", mono && "m", error && "bad", more].filter(Boolean).join(" ");

/** Label, hint, message, one-line input. With children it frames them; they must carry `fieldIds(name).id`. */
export function Field({
  label,
  name,
  hint,
  error,
  mono,
  id,
  className,
  children,
  ...props
}: Omit<ComponentProps<"input">, "name"> & Around) {
  const ids = fieldIds(name, id);
  return (
    <Frame ids={ids} label={label} hint={hint} error={error}>
      {children ?? (
        <input
          type="text"
          {...props}
          {...wiring(ids, hint, error)}
          name={name}
          className={face(mono, error, className)}
        />
      )}
    </Frame>
  );
}

export function TextArea({
  label,
  name,
  hint,
  error,
  mono,
  id,
  className,
  ...props
}: Omit<ComponentProps<"textarea">, "name"> & Around) {
  const ids = fieldIds(name, id);
  return (
    <Frame ids={ids} label={label} hint={hint} error={error}>
      <textarea
        rows={4}
        {...props}
        {...wiring(ids, hint, error)}
        name={name}
        className={face(mono, error, className)}
      />
    </Frame>
  );
}

/** A choice among many. Give `options`, or option elements as children. */
export function Select({
  label,
  name,
  hint,
  error,
  mono,
  id,
  className,
  options,
  children,
  ...props
}: Omit<ComponentProps<"select">, "name"> & Around & { options?: { value: string; label: string }[] }) {
  const ids = fieldIds(name, id);
  return (
    <Frame ids={ids} label={label} hint={hint} error={error}>
      <select {...props} {...wiring(ids, hint, error)} name={name} className={face(mono, error, className)}>
        {options?.map((o) => (
          <option key={o.value} value={o.value}>
            {o.label}
          </option>
        ))}
        {children}
      </select>
    </Frame>
  );
}

type PlateProps = Omit<ComponentProps<"input">, "title" | "type"> & {
  title: ReactNode;
  detail?: ReactNode;
};

/** A radio as a plate: title, and what follows from choosing it. The radio itself shows the choice. */
export function Choice({ title, detail, className, ...props }: PlateProps) {
  return (
    <label className={["opt notch", className].filter(Boolean).join(" ")}>
      <input type="radio" {...props} className="rad" />
      <span>
        <b>{title}</b>
        {detail ? <span className="s">{detail}</span> : null}
      </span>
    </label>
  );
}

/** A check box with its words to the right. */
export function Check({ title, detail, className, ...props }: PlateProps) {
  return (
    <label className={["chk", className].filter(Boolean).join(" ")}>
      <input type="checkbox" {...props} className="box" />
      <span>
        {title}
        {detail ? <span className="hint block">{detail}</span> : null}
      </span>
    </label>
  );
}

/**
 * Several choices under one question. The group's id is what an error summary links to, and it can
 * take focus for that.
 */
export function ChoiceGroup({
  legend,
  name,
  hint,
  error,
  quiet,
  children,
}: {
  legend: ReactNode;
  name: string;
  hint?: ReactNode;
  error?: string | null;
  /** The page's heading asks the question already: keep the legend for readers only. */
  quiet?: boolean;
  children: ReactNode;
}) {
  const ids = fieldIds(name);
  const described = [hint ? ids.hint : "", error ? ids.error : ""].filter(Boolean).join(" ") || undefined;
  return (
    <fieldset className="field" id={ids.id} tabIndex={-1} aria-describedby={described}>
      <legend className={quiet ? "vh" : undefined}>{legend}</legend>
      {hint ? (
        <p className="hint" id={ids.hint}>
          {hint}
        </p>
      ) : null}
      {error ? (
        <p className="err" id={ids.error}>
          {error}
        </p>
      ) : null}
      {children}
    </fieldset>
  );
}
