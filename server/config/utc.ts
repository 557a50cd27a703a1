/**
 * Imported for its effect: this process works in UTC. The database connector writes and reads
 * `Date`s in the zone of the process, whatever its own `timezone` option says; people's and sites'
 * zones are always named where a time is shown.
 */
process.env.TZ = 'UTC';
