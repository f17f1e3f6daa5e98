/** Tillwater's mark: a parcel, cut by furrows, fed from one corner by a canal. */
export function Mark() {
  return (
    <svg viewBox="0 0 24 24" aria-hidden="true" focusable="false">
      <path d="M3 3h18v18H3z" fill="none" stroke="currentColor" strokeWidth="1.75" />
      <path d="M3 3l18 18" stroke="var(--accent)" strokeWidth="3.5" />
      <path d="M9 3v6M15 3v12M9 21v-6M15 21v-1" stroke="currentColor" strokeWidth="1.5" />
    </svg>
  );
}
