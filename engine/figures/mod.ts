/** The figures room. @module */
