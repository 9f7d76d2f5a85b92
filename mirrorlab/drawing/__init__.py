"""Every picture as a `Drawing` or a drawing sheet: shapes with a role each, known to no screen."""
