#define GOOD    1
#define STEPS   4095u
