"""The plant: what is done to the water between intake and return, and to the gas."""
