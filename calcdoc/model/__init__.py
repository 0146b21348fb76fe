"""The design checked: names, circles, units and temperatures."""
