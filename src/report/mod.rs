//! What people and machines read outside an editor; one file per format.
