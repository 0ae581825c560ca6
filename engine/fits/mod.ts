/** The fits room. @module */
