//! What a file means: names, and the lowering from tree to substances, solutions and labs.
