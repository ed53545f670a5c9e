"""Terminal report and exports of a saved result; no solver is needed."""
