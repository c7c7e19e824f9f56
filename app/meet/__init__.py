"""The meet by its rules: lifting order, declarations, what is on the bar. Pure: no web, database or clock."""
