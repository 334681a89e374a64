"""What is read off a diagram, a module or a Seifert matrix."""
