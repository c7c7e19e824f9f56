"""The desk: one use case, one function, one transaction. Joins the rules, the planner and the store."""
