"""Pages, forms and live updates. Translates; decides nothing."""
