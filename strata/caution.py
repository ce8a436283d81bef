"""The caution that every page and file carries, said once."""

#: The words by which a file is known to be strata's; they stay from version to version.
MARK = "lakes of this kind can kill"

CAUTION = (
    f"Caution: {MARK}. This program screens plans; it is one-dimensional, "
    "sees no plume nearer than its own lake-wide mean, and predicts no eruption. Its numbers "
    "decide nothing: they defer to the licensing authority, to local codes and to licensed "
    "practice."
)
