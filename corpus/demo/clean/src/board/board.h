/*
 * Which assembly are we? BOARD_REV comes from the build (make REV=3); the
 * bench boards still in the cupboard are revision 2.
 */
#ifndef BOARD_H
#define BOARD_H

#ifndef BOARD_REV
#define BOARD_REV 2
#endif

#if BOARD_REV >= 3
#include "board_r3.h"
#else
#include "board_r2.h"
#endif

#endif /* BOARD_H */
