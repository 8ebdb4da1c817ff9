#endif
#else
#elif 1
#if
#if (1 +
#endif
#endif
#define
#define 7 8
#include
#include "
#bogus
