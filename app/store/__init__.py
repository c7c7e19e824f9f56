"""Tables, queries, the journal. Rows stay in here: what leaves is frozen dataclasses of the pure rooms."""
