"""HTML only: routes that read a form, call appraisal, and render a view."""
