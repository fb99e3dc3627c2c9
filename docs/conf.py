"""Sphinx configuration."""

project = "plasmalin"
author = "The plasmalin developers"
extensions = ["myst_nb", "sphinx.ext.autodoc", "sphinx.ext.viewcode", "numpydoc"]
nb_execution_mode = "off"
myst_enable_extensions = ["dollarmath"]
numpydoc_show_class_members = False
autodoc_typehints = "none"
autodoc_member_order = "bysource"
exclude_patterns = ["_build", "Thumbs.db", ".DS_Store"]
html_theme = "alabaster"
html_theme_options = {
    "description": "from fluid laws to dispersion relations",
    "fixed_sidebar": True,
}
