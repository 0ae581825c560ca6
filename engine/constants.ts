/** Physical constants. @module */
