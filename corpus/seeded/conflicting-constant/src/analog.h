#ifndef ANALOG_H
#define ANALOG_H
#define AREF_MV     3000u
#define STEPS       4096u
#endif
