/** What a page says that sends somebody to the track; it never goes away while they are asked to look. */
export function TrackCaution() {
  return (
    <p role="note" className="border-l-[3px] border-ochre bg-wash-ochre px-16 py-12 text-table">
      <b className="font-medium">Expect movement on any track, at any time, in either direction.</b>{' '}
      Stand clear and still before you look at the screen. The railroad’s rules on electronic
      devices and on fouling the track apply (in the US 49 CFR 220 subpart C); this page is no
      authority to be there.
    </p>
  );
}
