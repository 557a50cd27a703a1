/** The words under a control that is wrong. */
export function Fault({ id, text }: { id?: string; text: string | null | undefined }) {
  if (!text) return null;
  return (
    <p id={id} className="text-note font-medium text-oxide">
      {text}
    </p>
  );
}
