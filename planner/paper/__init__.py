"""Printed pages and charts: pure functions of the record, which compute nothing."""
