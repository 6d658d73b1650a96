//! Speed of meshing, factorising, assembling and whole field solves.
