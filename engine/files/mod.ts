/** The files room. @module */
