"""The caution that every page and file carries, said once."""

CAUTION = (
    "Caution: lakes of this kind can kill. This program screens plans; it is one-dimensional, "
    "sees no plume nearer than its own lake-wide mean, and predicts no eruption. Its numbers "
    "decide nothing: they defer to the licensing authority, to local codes and to licensed "
    "practice."
)
