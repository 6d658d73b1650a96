//! Outlines to triangles: sized, layered, curved meshes of meridian sections.
