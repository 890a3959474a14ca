//! A solution's lines, in bench order, through the chemistry to a state; stocks out of stocks.
