/** The synthesis room. @module */
