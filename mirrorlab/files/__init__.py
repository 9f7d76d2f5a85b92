"""What leaves and enters: arrangement files, tables, pictures, meshes, cut sheets and reports."""
