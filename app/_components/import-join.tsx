/** How parcels that name no turnout or reach are joined to one. */
export function JoinChoice({ value }: { value: string }) {
  return (
    <div className="field">
      <label htmlFor="import-join">Parcels that name no turnout or reach</label>
      <select id="import-join" name="joinByPlace" defaultValue={value}>
        <option value="">stay without one</option>
        <option value="nearest-turnout">take the nearest turnout</option>
        <option value="nearest-reach">take the nearest reach</option>
        <option value="service-area">take the service area they lie in</option>
      </select>
    </div>
  );
}

/** How turnouts that name no reach are joined to one. */
export function TurnoutJoinChoice({ value }: { value: string }) {
  return (
    <div className="field">
      <label htmlFor="import-join">Turnouts that name no reach</label>
      <select id="import-join" name="joinByPlace" defaultValue={value}>
        <option value="">are left out</option>
        <option value="nearest-reach">take the nearest reach</option>
      </select>
    </div>
  );
}
