#define VREF_MV     3300u
#define RAIL        2
