/** The orbit room. @module */
