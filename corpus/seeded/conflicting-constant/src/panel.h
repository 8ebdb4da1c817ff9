#ifndef PANEL_H
#define PANEL_H
#define AREF_MV     3300u
#define ROWS        4
#endif
