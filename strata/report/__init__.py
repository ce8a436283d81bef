"""What readers see: figures, tables for the terminal, and the dossier."""
