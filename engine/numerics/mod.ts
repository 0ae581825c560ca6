/** The numerics room. @module */
