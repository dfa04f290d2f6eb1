"""Forms that the meshes of the shipped shots are put together from, and the writers of their files."""
