"""The tests of fourthrank: one folder per room, shared strategies and reference tables beside them."""
