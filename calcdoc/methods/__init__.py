"""The library of methods: what designs apply by name."""
